package criteria

import (
	"math"

	"escapement/engine/field/tissue"
	"escapement/engine/lead"
)

func (j *judge) paced() {
	rv := j.on("RV apex paced")
	j.say("QRS 120-190 ms", "textbook", within("QRS", rv.Duration(), 120, 190, 12))
	j.say("axis superior, -30 to -105", "textbook", within("axis", rv.axis(0), -105, -30, 15))
	j.say("V1 negative", "textbook", atMost("r/S", rv.r(lead.V1)/(rv.s(lead.V1)+small), 0.35, 0.3))
	j.say("I positive", "textbook", atLeast("R-S", rv.r(lead.I)-rv.s(lead.I), 0, 0.2))
	j.say("T opposite in V1 and III", "textbook", atLeast("V1", rv.t(lead.V1), 0, 0.2), atLeast("III", rv.t(lead.III), 0, 0.2))

	b := j.on("biventricular paced")
	j.say("narrower than from the RV apex and than LBBB", "textbook", atLeast("than RV", rv.Duration()-b.Duration(), 15, 10),
		atLeast("than LBBB", j.set.beat("LBBB").Duration()-b.Duration(), 1, 10))
	j.say("q or S in I", "textbook", atLeast("q", max(b.q(lead.I), b.s(lead.I)-b.r(lead.I)), 0.03, 0.05))
	j.say("R/S 1 or more in V1", "textbook", atLeast("R/S", b.ratio(lead.V1), 1, 0.5))

	b = j.on("His paced with septum")
	j.say("QRS wider than normal, at most 135 ms", "textbook", within("QRS", b.Duration(), j.set.beat("normal").Duration()+1, 135, 10))
	b = j.on("left bundle paced")
	j.say("late r' in V1", "textbook", atLeast("r'", b.rAfter(lead.V1), 0.05, 0.1))
	j.say("QRS no wider than RBBB", "textbook", atMost("QRS", b.Duration(), j.set.beat("RBBB").Duration(), 10))
}

func (j *judge) ectopic() {
	b := j.on("RV outflow beat")
	j.say("QRS 120 ms or more", "textbook", atLeast("QRS", b.Duration(), 120, 12))
	j.say("axis inferior, 60 to 120", "textbook", within("axis", b.axis(0), 60, 120, 15))
	j.say("V1 negative", "textbook", atMost("r/S", b.r(lead.V1)/(b.s(lead.V1)+small), 0.5, 0.3))
	for _, l := range []lead.Name{lead.II, lead.III, lead.AVF} {
		j.say("tall R in "+l.String(), "textbook", atMost("S/R", b.s(l)/(b.r(l)+small), 0.25, 0.2))
	}
	for _, l := range []lead.Name{lead.AVR, lead.AVL} {
		j.say("negative in "+l.String(), "textbook", atMost("R/S", b.ratio(l), 0.25, 0.2))
	}
	j.say("transition at V3 or later", "textbook", atMost("R/S in V2", b.ratio(lead.V2), 1, 0.4))

	b = j.on("LV lateral beat")
	j.say("QRS 120 ms or more", "textbook", atLeast("QRS", b.Duration(), 120, 12))
	j.say("V1 positive", "textbook", atLeast("R/S", b.ratio(lead.V1), 2, 1))
	for _, l := range []lead.Name{lead.I, lead.AVL, lead.V6} {
		j.say("negative in "+l.String(), "textbook", atLeast("S-R", b.s(l)-b.r(l), 0, 0.2))
	}
	j.say("T opposite in V1", "textbook", atMost("T", b.t(lead.V1), 0, 0.2))

	b = j.on("LV apex beat")
	j.say("axis superior", "textbook", within("axis", b.axis(0), -150, -45, 15))
	for _, l := range []lead.Name{lead.V4, lead.V5, lead.V6} {
		j.say("negative in "+l.String(), "textbook", atLeast("S-R", b.s(l)-b.r(l), 0, 0.2))
	}
}

func (j *judge) preexcited() {
	for _, c := range []string{"WPW left lateral", "WPW posteroseptal", "WPW right free wall"} {
		b := j.on(c)
		j.say("QRS 110 ms or more", "AHA", atLeast("QRS", b.Duration(), 110, 12))
		j.say("PR under 120 ms", "AHA", atMost("PR", j.set.pr(c), 119, 10))
	}
	for _, alone := range []string{"", " alone"} {
		b := j.on("WPW left lateral" + alone)
		j.say("V1 positive", "textbook", atLeast("R-S", b.r(lead.V1)-b.s(lead.V1), 0, 0.2))
		j.say("delta positive in V1", "textbook", atLeast("delta", b.delta(lead.V1), 0, 0.03))
		j.say("delta negative or flat in I or aVL", "textbook", atMost("delta", min(b.delta(lead.I), b.delta(lead.AVL)), 0.005, 0.03))
		b = j.on("WPW posteroseptal" + alone)
		j.say("delta negative in III, aVF", "textbook", atMost("III", b.delta(lead.III), 0, 0.03), atMost("aVF", b.delta(lead.AVF), 0, 0.03))
		j.say("delta positive in I, aVL", "textbook", atLeast("I", b.delta(lead.I), 0, 0.03), atLeast("aVL", b.delta(lead.AVL), 0, 0.03))
		j.say("R over S in V2", "textbook", atLeast("R-S", b.r(lead.V2)-b.s(lead.V2), 0, 0.3))
		b = j.on("WPW right free wall" + alone)
		j.say("delta positive in I", "textbook", atLeast("delta", b.delta(lead.I), 0, 0.03))
		j.say("S over R in V1", "textbook", atLeast("S-R", b.s(lead.V1)-b.r(lead.V1), 0, 0.2))
		j.say("transition at V3 or later", "textbook", atMost("R/S in V2", b.ratio(lead.V2), 1, 0.4))
	}
}

func (j *judge) from(site string) Beat {
	j.condition, j.b = "P from "+site, j.set.atrial(site)
	return j.b
}

func (j *judge) atrial() {
	b := j.from("right_atrium")
	j.say("axis 0 to 75", "AHA", within("axis", b.axis(0), 0, 75, 15))
	j.say("P 80-120 ms", "textbook", within("P", b.Duration(), 80, 120, 10))
	j.say("upright in II, 0.05-0.25 mV", "textbook", within("P", b.r(lead.II), 0.05, 0.25, 0.05), atMost("dip", b.s(lead.II)/(b.r(lead.II)+small), 0.25, 0.2))
	y := b.qrs(lead.V1)
	hi, _ := extremes(y[:len(y)/2])
	_, lo := extremes(y[len(y)/2:])
	j.say("V1 first up, then down", "textbook", within("up", hi, 0.02, 0.15, 0.02), atMost("down", lo, -0.015, 0.02))
	up, down := b.rs(lead.AVR)
	j.say("aVR negative", "textbook", atMost("up", up, 0.02, 0.02), atLeast("down", down, 0.03, 0.02))
	j.say("septum reached after 25-60 ms (PA)", "Josephson, from memory", within("PA", j.set.septumAt, 25, 60, 5))

	for _, site := range []string{"coronary_sinus", "atrial_septum"} {
		b = j.from(site)
		for _, l := range []lead.Name{lead.II, lead.III, lead.AVF} {
			up, down := b.rs(l)
			j.say("negative in "+l.String(), "textbook", atMost("up/down", up/(down+small), 0.35, 0.2))
		}
		up, down = b.rs(lead.AVR)
		j.say("positive in aVR", "textbook", atLeast("up-down", up-down, 0, 0.03))
		up, down = b.rs(lead.V1)
		j.say("positive in V1", "textbook", atLeast("up-down", up-down, 0, 0.03))
	}
	b = j.from("left_pulmonary_veins")
	up, down = b.rs(lead.V1)
	j.say("positive in V1", "textbook", atLeast("up/down", up/(down+small), 2, 1))
	for _, l := range []lead.Name{lead.I, lead.AVL} {
		up, down = b.rs(l)
		j.say("negative in "+l.String(), "textbook", atLeast("down-up", down-up, 0, 0.03))
	}
	j.say("upright in II", "textbook", atLeast("P", b.r(lead.II), 0.04, 0.03))
	b = j.from("right_pulmonary_veins")
	up, down = b.rs(lead.V1)
	j.say("positive in V1", "textbook", atLeast("up/down", up/(down+small), 2, 1))
	b = j.from("right_appendage")
	up, down = b.rs(lead.V1)
	j.say("negative in V1", "textbook", atLeast("down-up", down-up, 0, 0.03))
}

// Atrial judges the P waves alone.
func (s *Set) Atrial() []Verdict {
	j := &judge{set: s}
	j.atrial()
	return j.out
}

// AtrialTargets are what a search for atria aims at beyond the criteria: a
// margin, and usual times. PA 40-48 ms leaves AH and HV room in a PR of 160.
func (s *Set) AtrialTargets() []Verdict {
	j := &judge{set: s}
	b := j.from("right_atrium")
	var solver tissue.Solver
	far := s.Atria.Travel(&solver, s.Atria.Entry("right_atrium"), s.Atria.Entry("left_atrium"))
	up, _ := b.rs(lead.V1)
	j.say("targets", "choice", within("V1", up, 0.04, 0.12, 0.02), within("PA", s.septumAt, 40, 48, 3), within("P", b.Duration(), 88, 108, 8), within("axis", b.axis(0), 40, 64, 10),
		within("II", b.r(lead.II), 0.1, 0.18, 0.04), within("lateral left atrium", float64(far)/1000, 65, 92, 8))
	for _, site := range []string{"coronary_sinus", "atrial_septum"} {
		b := j.from(site)
		up, down := b.rs(lead.V1)
		j.say("targets", "choice", atLeast("V1", up-down, 0.01, 0.02))
		up, down = b.rs(lead.II)
		j.say("targets", "choice", atMost("II", up/(down+small), 0.15, 0.2))
	}
	return j.out
}

// Score is what a search makes smaller: a part for every criterion missed and a
// part for by how much, so that it is pulled towards passing more of them.
func Score(v []Verdict) float64 {
	sum := 0.0
	for i := range v {
		m := v[i].Miss()
		if m > 0 {
			sum += 0.5
		}
		sum += math.Min(m, 2) + 0.3*math.Min(math.Max(m-2, 0), 6)
	}
	return sum
}
