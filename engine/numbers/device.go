package numbers

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// Device is what there is to say of a pacemaker: the sums that follow from its
// settings, and what it did on the strip.
type Device struct {
	Warnings   []string           `json:"warnings"` // about the settings; the strip stands all the same
	Arithmetic []Sum              `json:"arithmetic"`
	Counted    []Number           `json:"counted"`
	Intervals  []measure.Interval `json:"intervals"`
}

// Sum is a number that follows from settings, with how it was reached.
type Sum struct {
	Name    string `json:"name"`
	Label   string `json:"label"`
	Text    string `json:"text"`
	Unit    string `json:"unit"`
	Formula string `json:"formula"`
	Numbers string `json:"numbers"`
	Source  string `json:"source"`
}

// usualMargin is how much stronger than the threshold a chronic output is, and than the
// programmed sensitivity the signal: the first common practice, from memory; the second
// an education page, read.
const usualMargin = 2

// OfDevice is nil where the plan has no pacemaker, that is where set is nil.
func OfDevice(p *plan.Plan, set *plan.Device, r *measure.Report) *Device {
	if set == nil {
		return nil
	}
	s, heart := &set.Settings, p.Patient()
	if r := r.Device; r != nil && r.LeadPR != nil {
		heart.PR = tick.MS(*r.LeadPR)
	}
	if r := r.Device; r != nil && r.LeadAR != nil {
		heart.AR = tick.MS(*r.LeadAR)
	}
	d := &Device{Warnings: []string{}, Arithmetic: []Sum{}, Counted: []Number{}, Intervals: []measure.Interval{}}
	for _, w := range pacer.Warnings(s, heart) {
		d.Warnings = append(d.Warnings, upper(w.Text)+".")
	}
	vs := pacer.Arithmetic(s, heart)
	for i := range vs {
		if vs[i].Name == "pattern" && r.Summary.PR != nil {
			vs[i].Label += ", if the heart did not conduct"
		}
	}
	d.put(vs, "")
	d.leads(p, set)
	if r := r.Device; r != nil {
		d.Counted = counted(r)
		d.Intervals = append(d.Intervals, r.Intervals...)
	}
	return d
}

func (d *Device) put(vs []pacer.Value, of string) {
	for _, v := range vs {
		d.Arithmetic = append(d.Arithmetic, Sum{of + v.Name, v.Label, v.Text, v.Unit, v.Formula, v.Numbers, v.Source})
	}
}

// leads adds the threshold and the margin of every lead that the mode stimulates by,
// and warns of one that cannot capture, or whose channel hears nothing.
func (d *Device) leads(p *plan.Plan, set *plan.Device) {
	m := set.Settings.Mode
	for _, l := range []struct {
		name, label           string
		lead                  pacer.Lead
		stimulates, listensTo bool
	}{
		{"atrial", "atrial", pacer.RA, m.PacesA(), m.SensesA()},
		{"ventricular", "ventricular", pacer.RV, m.PacesV(), m.SensesV()},
		{"left", "left ventricular", pacer.LV, m.Multisite == 'V', false},
	} {
		at := "pacemaker.leads." + l.name + "."
		volt := func(name string) float64 { return p.Or(at+name, 0) }
		if own := &set.Leads[l.lead]; l.stimulates {
			s := pacer.Strength{Rheobase: volt("rheobase_v"), Chronaxie: tick.MS(volt("chronaxie_ms"))}
			vs := s.Values(own.Amplitude, tick.MS(volt("width_ms")))
			for i := range vs {
				vs[i].Label = l.label + " " + vs[i].Label
			}
			if own.Threshold > 0 { // without one every stimulus captures, and there is no margin
				d.put(vs, l.name+"_")
			}
			if own.Muscle != event.None {
				muscle := pacer.Strength{Rheobase: volt("muscle_rheobase_v"), Chronaxie: s.Chronaxie}.Values(own.Amplitude, tick.MS(volt("width_ms")))
				muscle[0].Label = "capture threshold of the muscle beside it"
				d.put(muscle[:1], l.name+"_muscle_")
			}
			if margin := own.Amplitude / own.Threshold; own.Threshold > 0 && own.Captures() && margin < usualMargin {
				d.Warnings = append(d.Warnings, fmt.Sprintf("The %s output of %.2f V is %.1f times the threshold of %.2f V; 2 times is usual.", l.label, own.Amplitude, margin, own.Threshold))
			}
			if !own.Captures() {
				d.Warnings = append(d.Warnings, fmt.Sprintf("The %s output of %.2f V is below the threshold of %.2f V: no stimulus captures.", l.label, own.Amplitude, own.Threshold))
			}
		}
		if margin := volt("signal_mv") / volt("sensitivity_mv"); l.listensTo && set.Leads[l.lead].Senses && margin < usualMargin {
			d.Warnings = append(d.Warnings, fmt.Sprintf("The %s signal of %g mV is %.1f times the sensitivity of %g mV; 2 times is usual.", l.label, volt("signal_mv"), margin, volt("sensitivity_mv")))
		}
		if l.listensTo && !set.Leads[l.lead].Senses {
			d.Warnings = append(d.Warnings, fmt.Sprintf("The %s signal of %g mV is below the sensitivity of %g mV: the heart is not sensed there.", l.label, volt("signal_mv"), volt("sensitivity_mv")))
		}
	}
}

// counted lists what the device did. What never came, and no one would miss, is left
// out.
func counted(r *measure.Device) []Number {
	whole := func(n int) *float64 {
		v := float64(n)
		return &v
	}
	some := func(n int) *float64 {
		if n == 0 {
			return nil
		}
		return whole(n)
	}
	// A chamber that the device knows nothing of is not counted as zeros.
	atrium := func(n int) *float64 { return unless(r.AtrialPaced == nil && r.RefractoryA == 0, whole(n)) }
	ventricle := func(n int) *float64 { return unless(r.VentricularPaced == nil && r.RefractoryV == 0, whole(n)) }
	list := []Number{
		{Name: "atrial_paced_percent", Label: "atrium paced", Value: r.AtrialPaced, Unit: "%", Help: "AP of AS and AP."},
		{Name: "ventricular_paced_percent", Label: "ventricle paced", Value: r.VentricularPaced, Unit: "%", Help: "VP of VS and VP."},
		{Name: "av_synchronous_percent", Label: "AV synchronous", Value: r.Synchronous, Unit: "%", Help: "QRS complexes with a P at most 300 ms before them (Circulation 2024;150:439)."},
		{Name: "as_count", Label: "AS, P sensed", Value: atrium(r.AS), Help: "Atrial signals that the timing used."},
		{Name: "ap_count", Label: "AP, atrial stimuli", Value: atrium(r.AP), Help: "Stimuli in the atrium."},
		{Name: "vs_count", Label: "VS, R sensed", Value: ventricle(r.VS), Help: "Ventricular signals that the timing used."},
		{Name: "vp_count", Label: "VP, ventricular stimuli", Value: ventricle(r.VP), Help: "Stimuli in the ventricle."},
		{Name: "longest_without_qrs_ms", Label: "longest without QRS", Value: &r.Longest, Unit: "ms", Help: "Between QRS complexes, or to an end of the strip."},
		{Name: "atrial_refractory_count", Label: "atrial, refractory", Value: some(r.RefractoryA), Help: "Atrial signals in refractory periods."},
		{Name: "ventricular_refractory_count", Label: "ventricular, refractory", Value: some(r.RefractoryV), Help: "Ventricular signals in refractory periods."},
		{Name: "atrial_blanked_count", Label: "atrial, not heard", Value: some(r.BlankedA), Help: "Atrial depolarisations in blanking periods."},
		{Name: "ventricular_blanked_count", Label: "ventricular, not heard", Value: some(r.BlankedV), Help: "Ventricular depolarisations in blanking periods."},
		{Name: "atrial_no_capture_count", Label: "AP without capture", Value: some(r.LostA), Help: "Atrial stimuli that no P followed."},
		{Name: "ventricular_no_capture_count", Label: "VP without capture", Value: some(r.LostV), Help: "Ventricular stimuli that no QRS followed."},
		{Name: "fusion_count", Label: "fusion beats", Value: some(r.Fusion), Help: "QRS complexes that a stimulus and the heart made together."},
		{Name: "pseudofusion_count", Label: "pseudofusion beats", Value: some(r.Pseudofusion), Help: "Stimuli within a QRS that the heart made itself."},
		{Name: "safety_stimulus_count", Label: "safety stimuli", Value: some(r.Safety), Help: "Early ventricular stimuli after a signal in the crosstalk window."},
		{Name: "noise_count", Label: "noise", Value: some(r.Noise), Help: "Signals that were taken for noise."},
		{Name: "mode_change_count", Label: "mode changes", Value: some(r.ModeChanges), Help: "How often the device changed its mode."},
	}
	out := []Number{}
	for _, n := range list {
		if n.Value != nil {
			n.Source = modelled
			out = append(out, n)
		}
	}
	return out
}

func unless(out bool, v *float64) *float64 {
	if out {
		return nil
	}
	return v
}

func upper(s string) string {
	if s == "" || s[0] < 'a' || s[0] > 'z' {
		return s
	}
	return string(s[0]-'a'+'A') + s[1:]
}
