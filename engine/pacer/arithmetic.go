package pacer

import (
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
	PR        tick.Dur // conducted PR, at the leads
	VA        tick.Dur // retrograde conduction time, at the leads
	AtrialERP tick.Dur
	Flutter   tick.Dur // cycle of an atrial flutter
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
	lri, mtri, tarp := interval(s.LowerRate), interval(s.UpperRate), s.SensedAV+s.PVARP
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
		vs = append(vs, length("tarp", "total atrial refractory period (TARP)", tarp, "SAV + PVARP", plus(s.SensedAV, s.PVARP), sourceUpper),
			rate("two_to_one", "2:1 point", tarp, "60000 / TARP", "60000 / "+number(tarp.MS()), sourceUpper))
		if mtri > 0 {
			vs = append(vs, upperValues(s, p, mtri, tarp)...)
		}
		vs = append(vs, loopValues(s, p, mtri)...)
	}
	return append(vs, rhythmValues(s, p, lri)...)
}

func upperValues(s *Settings, p Patient, mtri, tarp tick.Dur) []Value {
	vs := []Value{
		length("mtri", "upper-rate interval (MTRI)", mtri, "60000 / upper rate", "60000 / "+number(s.UpperRate), sourceDerived),
		length("wenckebach", "Wenckebach interval (W)", mtri-tarp, "MTRI - TARP", less(mtri, tarp), sourceUpper),
	}
	if mtri > tarp {
		vs = append(vs, length("longest_av", "longest AV delay at the upper rate", mtri-s.PVARP, "MTRI - PVARP", less(mtri, s.PVARP), sourceDerived))
	}
	if p.PP > 0 {
		vs = append(vs, patternValues(s, p.PP, mtri)...)
	}
	return vs
}

func loopValues(s *Settings, p Patient, mtri tick.Dur) []Value {
	var vs []Value
	if p.VA > 0 && p.VA >= s.PVARP {
		sum := "the longer of " + number(mtri.MS()) + " and " + plus(p.VA, s.SensedAV)
		vs = append(vs, length("loop_cycle", "cycle of an endless loop", max(mtri, p.VA+s.SensedAV), "max(MTRI, VA + SAV), as VA >= PVARP", sum, sourceLoop))
	}
	if p.PR > 0 {
		vs = append(vs, length("locked_below", "P waves may lock in PVARP below", p.PR+s.PVARP, "PR + PVARP", plus(p.PR, s.PVARP), sourceLocked))
	}
	if p.Flutter > 0 {
		vs = append(vs, length("flutter_margin", "flutter cycle less the deaf time; below 0 every second wave is hidden",
			p.Flutter-s.SensedAV-s.PVAB, "flutter cycle - SAV - PVAB", less(p.Flutter, s.SensedAV)+" - "+number(s.PVAB.MS()), sourceFlutter))
	}
	return vs
}

func rhythmValues(s *Settings, p Patient, lri tick.Dur) []Value {
	if !s.Mode.dual() || !s.Mode.SensesA() || p.VA == 0 || p.VA >= s.PVARP {
		return nil
	}
	gap := lri - s.PacedAV - p.VA
	return []Value{length("synchrony_gap", "retrograde P to atrial stimulus; shorter than the atrial refractory period, the stimulus is lost",
		gap, "LRI - PAV - VA, as VA < PVARP", less(lri, s.PacedAV)+" - "+number(p.VA.MS()), sourceSync)}
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
