package pacer

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/tick"
)

func limit(vs []Value, name string) (float64, bool) {
	for _, v := range vs {
		if v.Name == name {
			return v.Amount, true
		}
	}
	return 0, false
}

func TestLimits(t *testing.T) {
	for _, c := range []struct {
		name    string // number and source of the check
		change  func(*Settings)
		patient Patient
		vary    Quantity
		limit   string
		want    float64
	}{
		{"1: 2:1 point, Furman 1985, read", nil, Patient{}, VarySinusRate, "two_to_one", 150},
		{"2: 2:1 point, Liryc, read", func(s *Settings) { s.PVARP = ms(280) }, Patient{}, VarySinusRate, "two_to_one", 60000.0 / 430},
		{"W3: 1:1 to the upper rate, Furman 1985", nil, Patient{}, VarySinusRate, "one_to_one", 120},
		// (PP - 400) / (500 - PP) = 1: PP 450.
		{"4:3 to 3:2, derived", nil, Patient{}, VarySinusRate, "wenckebach_4:3", 60000.0 / 450},
		{"10: 2:1 below the upper rate, Furman 1985", func(s *Settings) { s.SensedAV, s.PVARP, s.UpperRate = ms(200), ms(300), 140 }, Patient{}, VarySinusRate, "two_to_one", 120},
		{"upper rate for 1:1", nil, Patient{PP: ms(480)}, VaryUpperRate, "one_to_one", 125},
		{"longest PVARP before 2:1", nil, Patient{PP: ms(460)}, VaryPVARP, "two_to_one", 310},
		{"longest AV before 2:1", nil, Patient{PP: ms(460)}, VarySensedAV, "two_to_one", 210},
		{"13 and 15: loop, Alasti 2018, read", nil, Patient{VA: ms(300)}, VaryPVARP, "loop", 300},
		{"loop by VA", nil, Patient{}, VaryVATime, "loop", 250},
		{"19: flutter by PVAB, Goethals 2003, read", func(s *Settings) { s.SensedAV = ms(126) }, Patient{Flutter: ms(240)}, VaryPVAB, "flutter_hidden", 114},
		{"19: flutter by AV", func(s *Settings) { s.PVAB = ms(143) }, Patient{Flutter: ms(240)}, VarySensedAV, "flutter_hidden", 97},
		{"17: synchrony by lower rate, read, derived", func(s *Settings) { s.PacedAV, s.PVARP = ms(300), ms(300) }, Patient{VA: ms(250), AtrialERP: ms(230)}, VaryLowerRate, "synchrony", 60000.0 / 780},
		{"17: synchrony by PAV", func(s *Settings) { s.LowerRate, s.PVARP = 80, ms(300) }, Patient{VA: ms(250), AtrialERP: ms(230)}, VaryPacedAV, "synchrony", 270},
		{"17: synchrony by ERP", func(s *Settings) { s.LowerRate, s.PacedAV, s.PVARP = 80, ms(300), ms(300) }, Patient{VA: ms(250)}, VaryAtrialERP, "synchrony", 200},
		{"17: synchrony by VA", func(s *Settings) { s.LowerRate, s.PacedAV, s.PVARP = 80, ms(300), ms(300) }, Patient{AtrialERP: ms(230)}, VaryVATime, "synchrony", 220},
		{"17: synchrony by PVARP", func(s *Settings) { s.LowerRate, s.PacedAV = 80, ms(300) }, Patient{VA: ms(250), AtrialERP: ms(230)}, VaryPVARP, "synchrony", 250},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			if c.change != nil {
				c.change(&s)
			}
			got, ok := limit(Limits(&s, c.patient, c.vary), c.limit)
			if !ok || math.Abs(got-c.want) > 0.001 {
				t.Errorf("got %v (%v), want %v", got, ok, c.want)
			}
		})
	}
}

func TestLimitsThatDoNotExistAreLeftOut(t *testing.T) {
	s := Default()
	s.SensedAV, s.PVARP, s.UpperRate = ms(200), ms(300), 140
	if _, ok := limit(Limits(&s, Patient{}, VarySinusRate), "one_to_one"); ok {
		t.Error("TARP is longer than MTRI: 1:1 ends at 2:1, there is no other limit")
	}
	s = Default()
	if vs := Limits(&s, Patient{VA: ms(300), AtrialERP: ms(230)}, VaryLowerRate); len(vs) > 0 {
		t.Errorf("VA is longer than PVARP, yet %v", vs)
	}
}

// Around every limit of the Wenckebach band the stepped pattern is the one on each side.
func TestTheLimitsOfTheBandAreWhereThePatternSteps(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := Default()
		s.SensedAV, s.PVARP = ms(rapid.Float64Range(80, 250).Draw(t, "sav")), ms(rapid.Float64Range(150, 400).Draw(t, "pvarp"))
		s.UpperRate = rapid.Float64Range(80, 180).Draw(t, "upper")
		mtri := interval(s.UpperRate)
		for _, v := range Limits(&s, Patient{}, VarySinusRate) {
			pp := tick.PerMinute(v.Amount)
			// A rounding of PP is a microsecond; near 1:1 the steps lie closer than that.
			const off = 3 * tick.Microsecond
			longP, longV := Pattern(pp+off, mtri, s.SensedAV, s.PVARP)
			shortP, shortV := Pattern(pp-off, mtri, s.SensedAV, s.PVARP)
			if longV == 0 || shortV == 0 {
				continue
			}
			if longP*shortV == shortP*longV {
				t.Fatalf("%s at %v: %d:%d on both sides", v.Name, v.Amount, longP, longV)
			}
		}
	})
}
