package measure

import "escapement/engine/tick"

// Group is one Wenckebach period: a steady P cycle and the PR intervals of its
// conducted beats, after which one P was blocked. An n:(n-1) group has n-1 PRs.
//
// The rules are those of Friedman et al., J Electrocardiol 1975;8:307, and
// Barold, Ann Noninvasive Electrocardiol 2012;17:3: with increments d of the PR,
// RR = P + d inside the group, and the pause = 2P - sum of d. (Barold's abstract
// as displayed prints a minus in the first rule; a lengthening PR adds.)
type Group struct {
	P  tick.Dur
	PR []tick.Dur
}

// Increments of the PR from beat to beat.
func (g Group) Increments() []tick.Dur {
	var d []tick.Dur
	for i := 1; i < len(g.PR); i++ {
		d = append(d, g.PR[i]-g.PR[i-1])
	}
	return d
}

// RR intervals of the whole group: one per increment, then the pause.
func (g Group) RR() []tick.Dur {
	var rr []tick.Dur
	for _, d := range g.Increments() {
		rr = append(rr, g.P+d)
	}
	return append(rr, g.Pause())
}

// Pause is the RR interval over the blocked P, up to a beat with the group's
// first PR again.
func (g Group) Pause() tick.Dur {
	pause := 2 * g.P
	for _, d := range g.Increments() {
		pause -= d
	}
	return pause
}

// Sum of all RR intervals: n times P for an n:(n-1) group.
func (g Group) Sum() tick.Dur {
	var sum tick.Dur
	for _, rr := range g.RR() {
		sum += rr
	}
	return sum
}

// Typical tells whether the group has the classical form: the first PR is the
// shortest and increments fall, so that the first RR is the longest and RR falls
// (Friedman et al., who found all features together in 15% of cycles, mostly
// short ones); and the pause is longer than the RR before it and shorter than
// twice the shortest RR (Katz and Pick; Schamroth; from memory).
func (g Group) Typical() bool {
	d, rr := g.Increments(), g.RR()
	if len(d) == 0 {
		return false
	}
	for i := range d {
		if d[i] < 0 || i > 0 && d[i] > d[i-1] {
			return false
		}
	}
	shortest := rr[len(d)-1] // RR falls with the increments
	return g.Pause() < 2*shortest && g.Pause() > shortest
}
