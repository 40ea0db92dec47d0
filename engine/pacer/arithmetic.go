package pacer

import (
	"math"
	"strconv"

	"escapement/engine/tick"
)

// Value is a number that follows from the settings, with how it was reached.
type Value struct {
	Name    string // stable: "tarp"
	Label   string // for people: "total atrial refractory period"
	Amount  float64
	Unit    string // "ms", "/min", "V" or "" for a pattern, which Text tells
	Text    string // the amount as it is written, or the pattern: "4:3"
	Formula string // "SAV + PVARP"
	Numbers string // "150 + 250 = 400 ms"
	Source  string
}

// Patient is what is known of the heart, for the values that need it. Zero: not
// known, and the values that need it are left out.
type Patient struct {
	PP        tick.Dur // atrial cycle
	PR        tick.Dur // from the signal of a P to that of the QRS it is conducted to
	AR        tick.Dur // from an atrial stimulus to the signal of the QRS it is conducted to
	VA        tick.Dur // retrograde conduction time, at the leads
	AtrialERP tick.Dur // at the cycle ERPCycle
	Flutter   tick.Dur // cycle of an atrial flutter

	// ERPSlope is how much AtrialERP lengthens with the cycle, per unit; cycles above
	// ERPLongest count as that. ERPCycle 0: it does not change.
	ERPSlope             float64
	ERPCycle, ERPLongest tick.Dur

	// What the leads hear besides the beats of their own chamber; 0: nothing.
	FarField tick.Dur // a QRS on the atrial channel, so long after it
	TWave    tick.Dur // its T wave on the ventricular channel
	Cross    tick.Dur // an atrial stimulus on the ventricular channel
}

// AtrialERPAt is the atrial refractory period after a cycle.
func (p *Patient) AtrialERPAt(cycle tick.Dur) tick.Dur {
	if p.ERPCycle == 0 || p.AtrialERP == 0 {
		return p.AtrialERP
	}
	if p.ERPLongest > 0 {
		cycle = min(cycle, p.ERPLongest)
	}
	return p.AtrialERP + tick.Dur(math.Round(p.ERPSlope*float64(cycle-p.ERPCycle)))
}

// Sources of the formulas, as the project's fact sheet names and tags them.
const (
	sourceUpper   = "Furman 1985, upper rate behavior (abstract read)"
	sourceDerived = "derived from the definition of the timing cycle"
	sourceEscape  = "Bernstein and Parsonnet 1995 (caption read)"
	sourceMemory  = "textbook, from memory"
	sourceLoop    = "Alasti 2018; cases of loops below the upper rate (abstract read)"
	sourceSync    = "Heart Rhythm 2016;13:1739 (read); inequality derived"
	sourceFlutter = "Goethals 2003 (read)"
	sourceLocked  = "Barold and Herweg 2012 (read); inequality derived"
)

// Arithmetic is the sums beside the strip, in the order in which they build on each
// other. Values that a mode has no use for are left out.
func Arithmetic(s *Settings, p Patient) []Value {
	var vs []Value
	lri, mtri := interval(s.LowerRate), interval(s.UpperRate)
	vs = append(vs, length("lower_rate_interval", "lower-rate interval (LRI)", lri, "60000 / lower rate",
		"60000 / "+number(s.LowerRate), sourceDerived))
	if s.Mode.dual() {
		vs = append(vs, length("aei", "atrial escape interval (AEI)", lri-s.PacedAV, "LRI - PAV", less(lri, s.PacedAV), sourceEscape))
		if s.Mode.SensesA() {
			aei := lri - s.PacedAV
			vs = append(vs, length("alert_window", "atrial alert window", aei-s.PVARP, "AEI - PVARP", less(aei, s.PVARP), sourceMemory))
		}
	}
	if s.Mode.Tracks() {
		vs = append(vs, s.tarpValues(mtri)...)
		if mtri > 0 {
			vs = append(vs, upperValues(s, p, mtri)...)
		}
		vs = append(vs, loopValues(s, p, mtri)...)
	}
	return append(append(vs, escapeValues(s, p, lri)...), rhythmValues(s, p, lri)...)
}

func length(name, label string, d tick.Dur, formula, sum, source string) Value {
	return Value{Name: name, Label: label, Amount: d.MS(), Unit: "ms", Text: number(d.MS()), Formula: formula,
		Numbers: sum + " = " + number(d.MS()) + " ms", Source: source}
}

func rate(name, label string, d tick.Dur, formula, sum, source string) Value {
	return Value{Name: name, Label: label, Amount: d.BPM(), Unit: "/min", Text: number(d.BPM()), Formula: formula,
		Numbers: sum + " = " + number(d.BPM()) + " /min", Source: source}
}

func less(a, b tick.Dur) string { return number(a.MS()) + " - " + number(b.MS()) }
func plus(a, b tick.Dur) string { return number(a.MS()) + " + " + number(b.MS()) }

// number has one decimal, and none where that is 0.
func number(x float64) string {
	s := strconv.FormatFloat(x, 'f', 1, 64)
	if s[len(s)-2:] == ".0" {
		s = s[:len(s)-2]
	}
	if s == "-0" {
		return "0"
	}
	return s
}
