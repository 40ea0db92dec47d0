package criteria

import "escapement/engine/lead"

// Verdicts judges every criterion.
func (s *Set) Verdicts() []Verdict {
	j := &judge{set: s}
	j.normal()
	j.bundles()
	j.fascicular()
	j.incomplete()
	j.paced()
	j.ectopic()
	j.preexcited()
	j.atrial()
	return j.out
}

// judge collects verdicts on one condition after another.
type judge struct {
	set       *Set
	condition string
	b         Beat
	out       []Verdict
}

func (j *judge) on(condition string) Beat {
	j.condition, j.b = condition, j.set.beat(condition)
	return j.b
}

func (j *judge) say(criterion, source string, bounds ...Bound) {
	j.out = append(j.out, Verdict{j.condition, criterion, source, bounds})
}

func (j *judge) normal() {
	b := j.on("normal")
	j.say("QRS 70-110 ms", "AHA", within("QRS", b.Duration(), 70, 110, 10))
	j.say("axis -30 to +90, area", "AHA", within("axis", b.axis(0), -30, 90, 15))
	j.say("axis -30 to +90, net amplitude", "AHA", within("axis", b.netAxis(), -30, 90, 15))
	r1, s1 := b.rs(lead.V1)
	j.say("rS in V1", "textbook", atLeast("S-R", s1-r1, 0, 0.3), atLeast("r", b.rBefore(lead.V1), 0.03, 0.05), atMost("r'", b.rAfter(lead.V1), 0.05, 0.1))
	j.say("R grows V1 to V4", "textbook", atLeast("V2-V1", b.r(lead.V2)-b.r(lead.V1), 0, 0.3),
		atLeast("V3-V2", b.r(lead.V3)-b.r(lead.V2), 0, 0.3), atLeast("V4-V3", b.r(lead.V4)-b.r(lead.V3), -0.1, 0.3))
	j.say("R/S below 1 in V1, V2 and above 1 in V5, V6", "textbook", atMost("V1", b.ratio(lead.V1), 1, 0.4), atMost("V2", b.ratio(lead.V2), 1, 0.4),
		atLeast("V5", b.ratio(lead.V5), 1, 0.4), atLeast("V6", b.ratio(lead.V6), 1, 0.4))
	for _, l := range []lead.Name{lead.I, lead.AVL, lead.V5, lead.V6} {
		j.say("septal q in "+l.String(), "textbook", within("q", b.q(l), 0.01, 0.3, 0.06), atMost("q/R", b.q(l)/(b.r(l)+small), 0.4, 0.3))
	}
	j.say("S under half of R in I", "realism", atMost("S/R", b.s(lead.I)/(b.r(lead.I)+small), 0.5, 0.2))
	var upright []Bound
	for _, l := range []lead.Name{lead.I, lead.II, lead.V2, lead.V3, lead.V4, lead.V5, lead.V6} {
		upright = append(upright, atLeast(l.String(), b.t(l), 0.04, 0.2))
	}
	j.say("T upright in I, II, V2-V6", "textbook", upright...)
	j.say("T inverted in aVR", "textbook", atMost("T", b.t(lead.AVR), 0, 0.2))
	j.say("R of 0.5 mV in II, 0.7-2.5 mV in V5, 0.5 mV in V6", "realism", atLeast("II", b.r(lead.II), 0.5, 0.2),
		within("V5", b.r(lead.V5), 0.7, 2.5, 0.3), atLeast("V6", b.r(lead.V6), 0.5, 0.2))
	var low []Bound
	for _, l := range []lead.Name{lead.II, lead.V4, lead.V5, lead.V6} {
		low = append(low, atMost(l.String(), b.t(l)/(b.r(l)+small), 0.8, 0.3))
	}
	j.say("T under 0.8 of R in II, V4-V6, under 0.8 mV in V2-V4", "realism", append(low,
		atMost("V2", b.t(lead.V2), 0.8, 0.2), atMost("V3", b.t(lead.V3), 0.8, 0.2), atMost("V4 mV", b.t(lead.V4), 0.8, 0.2))...)
	j.say("RV endocardium begins 5-10 ms after the LV's", "Durrer et al., Circulation 1970;41:899", within("after", j.set.rightAfterLeft(), 5, 10, 4))
	first, last, apex := j.set.epicardium()
	j.say("RV apex 5-30 ms after QRS onset", "Josephson, by a secondary page", within("apex", apex, 5, 30, 10))
	j.say("first RV epicardium 7-25 ms after QRS onset", "Wyndham et al., Circulation 1979;59:161, abstract", within("first", first, 7, 25, 10))
	j.say("last epicardium 63-96 ms after QRS onset", "Wyndham et al., Circulation 1979;59:161, abstract", within("last", last, 63, 96, 10))
	j.say("PR 120-200 ms", "textbook", within("PR", j.set.pr("normal"), 120, 200, 10))
}

func (j *judge) bundles() {
	b := j.on("LBBB")
	j.say("QRS 120 ms or more", "AHA", atLeast("QRS", b.Duration(), 120, 12))
	for _, l := range []lead.Name{lead.I, lead.AVL, lead.V5, lead.V6} {
		j.say("broad R in "+l.String(), "AHA", atLeast("R", b.r(l), 0.15, 0.3), atMost("S/R", b.sAfter(l)/(b.r(l)+small), 0.25, 0.2))
	}
	j.say("R notched or slurred in two of I, aVL, V5, V6", "AHA", atLeast("leads", b.notches(lead.I, lead.AVL, lead.V5, lead.V6), 2, 2))
	for _, l := range []lead.Name{lead.I, lead.V5, lead.V6} {
		j.say("no q in "+l.String(), "AHA", atMost("q", b.q(l), 0.03, 0.1))
	}
	for _, l := range []lead.Name{lead.V5, lead.V6} {
		j.say("R peaks after 60 ms in "+l.String(), "AHA", atLeast("peak", b.peakTime(l), 61, 20))
	}
	j.say("rS or QS in V1", "textbook", atMost("r/S", b.r(lead.V1)/(b.s(lead.V1)+small), 0.3, 0.3))
	j.say("ST-T opposite to QRS in I, V6, V1", "AHA", atMost("I", b.t(lead.I), 0, 0.2), atMost("V6", b.t(lead.V6), 0, 0.2), atLeast("V1", b.t(lead.V1), 0, 0.2))
	j.say("axis not beyond -45 or +90", "realism", within("axis", b.axis(0), -45, 90, 20))

	b = j.on("RBBB")
	j.say("QRS 120 ms or more", "AHA", atLeast("QRS", b.Duration(), 120, 12))
	j.say("rSR' in V1", "AHA", atLeast("S", b.s(lead.V1), 0.03, 0.1), atLeast("R'-r", b.rAfter(lead.V1)-b.rBefore(lead.V1), 0, 0.2))
	for _, l := range []lead.Name{lead.I, lead.V6} {
		r, s := b.widths(l)
		j.say("S wide in "+l.String(), "AHA", atLeast("S width over 40 ms or R", s-min(40, r), 1, 15))
	}
	j.say("R peaks by 50 ms in V5, V6", "AHA", atMost("V5", b.peakTime(lead.V5), 50, 15), atMost("V6", b.peakTime(lead.V6), 50, 15))
	j.say("T inverted in V1", "textbook", atMost("T", b.t(lead.V1), 0, 0.2))
	j.say("axis of the first 60 ms -30 to +90", "textbook", within("axis", b.axis(60), -30, 90, 20))
}

func (j *judge) fascicular() {
	b := j.on("LAFB")
	j.say("axis -45 to -90, area", "AHA", within("axis", b.axis(0), -90, -45, 15))
	j.say("axis -45 to -90, net amplitude", "AHA", within("axis", b.netAxis(), -90, -45, 15))
	q, r := b.q(lead.AVL), b.r(lead.AVL)
	j.say("qR in aVL", "AHA", atLeast("q", q, 0.02, 0.05), atLeast("R-q", r-q, 0, 0.2), atMost("S/R", b.sAfter(lead.AVL)/(r+small), 0.3, 0.2))
	j.say("q under half of R in aVL", "realism", atMost("q/R", q/(r+small), 0.5, 0.15))
	j.say("R peaks at 45 ms or later in aVL", "AHA", atLeast("peak", b.peakTime(lead.AVL), 45, 10))
	j.say("QRS under 120 ms", "AHA", atMost("QRS", b.Duration(), 119, 8))
	for _, l := range []lead.Name{lead.II, lead.III, lead.AVF} {
		j.say("rS in "+l.String(), "textbook", atLeast("S-R", b.s(l)-b.r(l), 0, 0.2), atLeast("r", b.rBefore(l), 0.03, 0.05))
	}
	j.say("QRS at most 25 ms wider than normal", "textbook", within("wider", b.Duration()-j.set.beat("normal").Duration(), 0, 25, 10))

	b = j.on("LPFB")
	j.say("axis +90 to +180, area", "AHA", within("axis", turn(b.axis(0)), 90, 180, 15))
	j.say("axis +90 to +180, net amplitude", "AHA", within("axis", turn(b.netAxis()), 90, 180, 15))
	for _, l := range []lead.Name{lead.I, lead.AVL} {
		j.say("rS in "+l.String(), "AHA", atLeast("S-R", b.s(l)-b.r(l), 0, 0.2), atLeast("r", b.rBefore(l), 0.02, 0.05))
	}
	for _, l := range []lead.Name{lead.III, lead.AVF} {
		q, r := b.q(l), b.r(l)
		j.say("qR in "+l.String(), "AHA", atLeast("q", q, 0.02, 0.05), atLeast("R-q", r-q, 0, 0.2), atMost("S/R", b.sAfter(l)/(r+small), 0.35, 0.2))
	}
	j.say("QRS under 120 ms", "AHA", atMost("QRS", b.Duration(), 119, 8))

	b = j.on("RBBB and LAFB")
	j.say("QRS 120 ms or more", "AHA", atLeast("QRS", b.Duration(), 120, 12))
	j.say("late R' in V1", "textbook", atLeast("R'", b.rAfter(lead.V1), 0.15, 0.2))
	j.say("axis of the first 70 ms left and superior", "textbook", within("axis", b.axis(70), -100, -40, 20))
	b = j.on("RBBB and LPFB")
	j.say("QRS 120 ms or more", "AHA", atLeast("QRS", b.Duration(), 120, 12))
	j.say("late R' in V1", "textbook", atLeast("R'", b.rAfter(lead.V1), 0.15, 0.2))
	j.say("axis of the first 70 ms right", "textbook", within("axis", turn(b.axis(70)), 80, 180, 20))
}

// turn puts an axis into 0 to 360.
func turn(deg float64) float64 {
	if deg < 0 {
		return deg + 360
	}
	return deg
}

func (j *judge) incomplete() {
	b := j.on("incomplete LBBB")
	j.say("QRS 110-119 ms, 15 ms late", "AHA", within("QRS", b.Duration(), 110, 119, 10))
	j.say("no q in I, V5, V6", "AHA", atMost("I", b.q(lead.I), 0.03, 0.1), atMost("V5", b.q(lead.V5), 0.03, 0.1), atMost("V6", b.q(lead.V6), 0.03, 0.1))
	b = j.on("incomplete RBBB")
	j.say("QRS 110-119 ms, 20 ms late", "AHA", within("QRS", b.Duration(), 110, 119, 10))
	j.say("r' in V1", "AHA", atLeast("r'", b.rAfter(lead.V1), 0.05, 0.1))
}
