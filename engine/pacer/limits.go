package pacer

import (
	"fmt"

	"escapement/engine/tick"
)

// Quantity is one number that is moved while all others stay. The zero Quantity is
// invalid.
type Quantity uint8

const (
	_             Quantity = iota
	VarySinusRate          // of a sinus node whose every impulse reaches the atrial lead
	VaryLowerRate          // Settings.LowerRate
	VaryUpperRate          // Settings.UpperRate
	VaryPVARP              // Settings.PVARP
	VaryPVAB               // Settings.PVAB
	VarySensedAV           // Settings.SensedAV
	VaryPacedAV            // Settings.PacedAV
	VaryVATime             // Patient.VA
	VaryAtrialERP          // Patient.AtrialERP
)

// steps is how many Wenckebach patterns have their limits listed, from 3:2 on.
const steps = 12

// Limits are the values of a quantity at which one behaviour gives way to another, for
// a heart that does not conduct downwards, by the closed forms of [Arithmetic] solved
// for that quantity. The quantity's own value in the settings is not looked at. Amount
// is in the unit of the quantity, /min for rates and ms for lengths. Limits that no
// value above 0 gives are left out.
func Limits(s *Settings, p Patient, q Quantity) []Value {
	var vs []Value
	for _, v := range s.limits(p, q) {
		if v.Amount > 0 {
			vs = append(vs, v)
		}
	}
	return vs
}

func (s *Settings) limits(p Patient, q Quantity) []Value {
	lri, mtri := interval(s.LowerRate), interval(s.UpperRate)
	var vs []Value
	if s.Mode.Tracks() {
		switch q {
		case VarySinusRate:
			vs = s.sinusLimits(mtri)
		case VaryUpperRate:
			if tarp := s.TARPAt(p.PP); p.PP >= tarp {
				vs = append(vs, rate("one_to_one", "1:1 from here on", p.PP, "60000 / PP, as PP >= TARP", "60000 / "+number(p.PP.MS()), sourceUpper))
			}
		case VaryPVARP:
			if s.adapts() {
				break
			}
			vs = append(vs, length("two_to_one", "2:1 above", p.PP-s.SensedAV, "PP - SAV", less(p.PP, s.SensedAV), sourceUpper))
			if p.VA > 0 {
				vs = append(vs, length("loop", "an endless loop can run up to here", p.VA, "VA", number(p.VA.MS()), sourceLoop))
			}
		case VarySensedAV:
			if s.adapts() {
				break
			}
			vs = append(vs, length("two_to_one", "2:1 above", p.PP-s.PVARP, "PP - PVARP", less(p.PP, s.PVARP), sourceUpper))
			if p.Flutter > 0 {
				vs = append(vs, length("flutter_hidden", "every second wave of a flutter is hidden above", p.Flutter-s.PVAB, "flutter cycle - PVAB", less(p.Flutter, s.PVAB), sourceFlutter))
			}
		case VaryPVAB:
			if p.Flutter > 0 {
				vs = append(vs, length("flutter_hidden", "every second wave of a flutter is hidden above", p.Flutter-s.SensedAV, "flutter cycle - SAV", less(p.Flutter, s.SensedAV), sourceFlutter))
			}
		case VaryVATime:
			vs = append(vs, length("loop", "an endless loop can run from here on", s.PVARP, "PVARP", number(s.PVARP.MS()), sourceLoop))
		}
	}
	if s.Mode.dual() && s.Mode.SensesA() {
		vs = append(vs, s.synchronyLimits(p, q, lri)...)
	}
	return vs
}

// sinusLimits: where 1:1 ends, each step of the Wenckebach band that the N formula
// gives, and where 2:1 begins.
func (s *Settings) sinusLimits(mtri tick.Dur) []Value {
	tarp, formula := s.shortestTracked(), "60000 / TARP"
	if s.adapts() {
		formula += ", as it is at that rate"
	}
	two := rate("two_to_one", "2:1 above", tarp, formula, "60000 / "+number(tarp.MS()), sourceUpper)
	if mtri <= tarp {
		return []Value{two}
	}
	vs := []Value{rate("one_to_one", "1:1 up to here", mtri, "60000 / MTRI", "60000 / "+number(mtri.MS()), sourceUpper)}
	if s.adapts() { // after a dropped P the AV delay is another one: no closed form
		if back := s.shortestReturn(); back < mtri {
			vs = append(vs, rate("two_to_one", "2:1 above", back, "60000 / TARP, as it is at half that rate", "60000 / "+number(back.MS()), sourceDerived))
		}
		return vs
	}
	for k := steps; k >= 1; k-- {
		// (PP - TARP) / (MTRI - PP) = k: N is k+2 from here down, k+1 above. The formula
		// holds where the pause is not shorter than MTRI, on both sides.
		pp := (tarp + tick.Dur(k)*mtri) / tick.Dur(k+1)
		if 2*pp-tick.Dur(k+1)*(mtri-pp) < mtri || 2*pp-tick.Dur(k)*(mtri-pp) < mtri {
			continue
		}
		name := fmt.Sprintf("%d:%d", k+3, k+2)
		vs = append(vs, rate("wenckebach_"+name, fmt.Sprintf("%s up to here, %d:%d above", name, k+2, k+1), pp,
			"60000 (k + 1) / (TARP + k MTRI), from N = floor((PP - TARP) / (MTRI - PP)) + 2",
			fmt.Sprintf("60000 x %d / (%s + %d x %s)", k+1, number(tarp.MS()), k, number(mtri.MS())), sourceDerived))
	}
	return append(vs, two)
}

// synchronyLimits solve LRI - PAV - VA = atrial ERP, the ERP being that at LRI.
func (s *Settings) synchronyLimits(p Patient, q Quantity, lri tick.Dur) []Value {
	if q != VaryVATime && (p.VA == 0 || q != VaryPVARP && p.VA >= s.PVARP) || q != VaryAtrialERP && p.AtrialERP == 0 {
		return nil
	}
	erp := p.AtrialERPAt(lri)
	one := func(label string, d tick.Dur, formula, sum string) []Value {
		return []Value{length("synchrony", "non-reentrant VA synchrony can run "+label, d, formula, sum, sourceSync)}
	}
	switch q {
	case VaryLowerRate:
		erp, sum := p.synchronyERP(s.PacedAV + p.VA)
		return []Value{rate("synchrony", "non-reentrant VA synchrony can run above", sum, "60000 / (PAV + VA + atrial ERP), as VA < PVARP",
			"60000 / ("+plus(s.PacedAV, p.VA)+" + "+number(erp.MS())+")", sourceSync)}
	case VaryPacedAV:
		return one("above", lri-p.VA-erp, "LRI - VA - atrial ERP, as VA < PVARP", less(lri, p.VA)+" - "+number(erp.MS()))
	case VaryVATime:
		return one("above, up to PVARP", lri-s.PacedAV-erp, "LRI - PAV - atrial ERP", less(lri, s.PacedAV)+" - "+number(erp.MS()))
	case VaryAtrialERP:
		more := p.AtrialERPAt(lri) - p.AtrialERP // by the cycle, whatever ERP is
		if p.AtrialERP == 0 {
			more = 0
		}
		return one("above", lri-s.PacedAV-p.VA-more, "LRI - PAV - VA, less what the cycle adds to the ERP, as VA < PVARP", less(lri, s.PacedAV)+" - "+plus(p.VA, more))
	case VaryPVARP:
		if lri-s.PacedAV-p.VA < erp {
			return one("above", p.VA, "VA, as LRI - PAV - VA < atrial ERP", number(p.VA.MS()))
		}
	}
	return nil
}

// synchronyERP is the atrial refractory period at the lower-rate interval that leaves
// just this much after rest, and that interval.
func (p *Patient) synchronyERP(rest tick.Dur) (erp, lri tick.Dur) {
	lri = rest + p.AtrialERP
	for range 100 { // the slope is far below 1: it settles
		next := rest + p.AtrialERPAt(lri)
		if next == lri {
			break
		}
		lri = next
	}
	return lri - rest, lri
}
