// Package numbers decides which numbers stand beside a strip, on the page, in prints
// and in exports: what was measured with its normal range and whose that is, what
// follows from a device's settings with how it was reached, what the device did, and
// which settings deserve a warning.
//
// It computes nothing of its own: values come from packages measure and pacer. Its
// JSON names are the page's.
package numbers

import (
	"escapement/engine/measure"
	"escapement/engine/tick"
)

// LeadsUpTo is the longest strip that has leads: 12 of them at 1000 samples a second
// take 43 MB. NoLeads says so beside one that is longer.
const (
	LeadsUpTo = tick.Time(15 * tick.Minute)
	NoLeads   = "Leads are computed for strips of up to 15 min; this one has its ladder alone."
)

// Number is one value with its unit. A nil Value was not measured, a nil Normal has no
// range that this project could name a source for.
type Number struct {
	Name   string      `json:"name"`
	Label  string      `json:"label"`
	Value  *float64    `json:"value"`
	Unit   string      `json:"unit"`
	Normal *[2]float64 `json:"normal"`
	Help   string      `json:"help"`
	Source string      `json:"source"`
}

const (
	statpearls = `StatPearls, "Atrioventricular Block"`
	aha3       = "AHA/ACCF/HRS 2009 part III, from memory"
	aha4       = "AHA/ACCF/HRS 2009 part IV, limit for men, from memory"
	alboni     = "Alboni et al., Eur Heart J 1985;6:602-608, and Josephson, from memory"
)

// Measured lists the medians of a strip with adult normal ranges and whose they are.
func Measured(s *measure.Summary) []Number {
	between := func(lo, hi float64) *[2]float64 { return &[2]float64{lo, hi} }
	return []Number{
		{"p_rate_bpm", "P rate", s.PRate, "/min", between(60, 100), "Median rate of P waves.", "Common practice."},
		{"v_rate_bpm", "QRS rate", s.VRate, "/min", between(60, 100), "Median rate of QRS complexes; in atrial fibrillation that of the mean RR.", "Common practice."},
		{"pr_ms", "PR", s.PR, "ms", between(120, 200), "Start of a P from above to the first ventricular activation it led to; not of a P that came up, nor of a wave of flutter or fibrillation.", statpearls},
		{"p_ms", "P", s.P, "ms", between(60, 120), "Duration in all leads together.", "Upper limit: consensus on interatrial block, Bayes de Luna et al., 2012; lower end common practice."},
		{"qrs_ms", "QRS", s.QRS, "ms", between(70, 110), "Duration in all leads together.", aha3},
		{"qt_ms", "QT", s.QT, "ms", nil, "Start of QRS to end of T in all leads together; what is normal depends on the rate, see QTcF.", practice},
		{"qtc_fridericia_ms", "QTcF", s.Fridericia, "ms", between(350, 450), "QT corrected by Fridericia: divided by the cube root of RR in seconds.", aha4},
		{"qrs_axis_deg", "QRS axis", s.QRSAxis, "°", between(-30, 90), "In the frontal plane, by area.", aha3},
		{"p_axis_deg", "P axis", s.PAxis, "°", between(0, 75), "In the frontal plane, by area.", "Common practice."},
		{"ah_ms", "AH", s.AH, "ms", between(55, 125), "Low atrial septum to His bundle.", alboni},
		{"hv_ms", "HV", s.HV, "ms", between(35, 55), "His bundle to the first ventricular activation.", alboni},
		{"va_ms", "VA", s.VA, "ms", nil, "First ventricular activation to the activation of the right atrium that it led to.", modelled},
	}
}
