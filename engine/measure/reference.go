package measure

import (
	"slices"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// early is how much shorter than the expected interval a beat must come to be
// called premature: nine tenths (a choice of this package; no source gives a
// number, and sinus rhythm itself varies by a tenth).
const earlyTenths = 9

func early(d, expected tick.Dur) bool { return expected > 0 && 10*d < earlyTenths*expected }

// origin of an atrial or ventricular wave in the report's words.
const (
	fromSinus       = "sinus"
	fromAtrium      = "atrial"
	fromJunction    = "junctional"
	fromFascicle    = "fascicular"
	fromVentricle   = "ventricular"
	fromStimulus    = "stimulus"
	fromAccessory   = "accessory"
	fromUnknown     = "unknown"
	sinusBradycardy = 50  // /min, 2018 ACC/AHA/HRS (older texts 60)
	physiological   = 100 // /min, upper limit for naming AV block, 2018 ACC/AHA/HRS
)

func (s *strip) origin(id event.ID) string {
	o := s.log.At(s.mark[id].origin)
	switch {
	case o == nil:
		return fromUnknown
	case o.Kind == event.Stimulus:
		return fromStimulus
	}
	switch s.log.Sites[o.Site].Tissue {
	case event.Sinus:
		return fromSinus
	case event.Atrium:
		return fromAtrium
	case event.Node, event.His:
		return fromJunction
	case event.Purkinje:
		return fromFascicle
	case event.Ventricle:
		return fromVentricle
	}
	return fromAccessory
}

func (s *strip) pOrigin(i int) string {
	if s.p[i].circling {
		return fromAtrium
	}
	return s.origin(s.p[i].id)
}

func (s *strip) vOrigin(i int) string {
	if s.v[i].circling {
		return fromVentricle
	}
	return s.origin(s.v[i].id)
}

// own tells whether a ventricular beat began below the atria: no P led to it.
func (s *strip) own(i int) bool { return s.v[i].p < 0 }

// stimulated is the tissue of the stimulus a beat began from, or 0.
func (s *strip) stimulated(id event.ID) event.Tissue {
	o := s.log.At(s.mark[id].origin)
	if o == nil || o.Kind != event.Stimulus {
		return 0
	}
	return s.log.Sites[o.Site].Tissue
}

// sourceSite is the site a beat began at: beats from one site form a run.
func (s *strip) sourceSite(id event.ID) event.SiteID {
	if o := s.log.At(s.mark[id].origin); o != nil {
		return o.Site
	}
	return event.None
}

func (s *strip) pp(i int) tick.Dur {
	if i <= 0 || i >= len(s.p) {
		return 0
	}
	return s.p[i].t.Sub(s.p[i-1].t)
}

func (s *strip) rr(i int) tick.Dur {
	if i <= 0 || i >= len(s.v) {
		return 0
	}
	return s.v[i].t.Sub(s.v[i-1].t)
}

func (s *strip) pr(i int) tick.Dur { return s.v[s.p[i].to].t.Sub(s.p[i].t) }

// descending tells whether a P came from above the AV node.
func (s *strip) descending(i int) bool { return !s.p[i].retrograde }

func medianDur(d []tick.Dur) tick.Dur {
	if len(d) == 0 {
		return 0
	}
	d = slices.Clone(d)
	slices.Sort(d)
	return (d[(len(d)-1)/2] + d[len(d)/2]) / 2
}

// plain tells whether the interval before P i lies between two sinus P waves
// with no beat from below between them: such a beat may hide a P, or reset the
// node, and the interval is not the sinus node's own.
func (s *strip) plain(i int) bool {
	return i > 0 && s.pOrigin(i) == fromSinus && s.pOrigin(i-1) == fromSinus && s.descending(i) && s.descending(i-1) && !s.crossed[i]
}

// findCrossed notes the P waves with a beat from below since the P before. Where
// every interval is crossed, as in some complete block, none counts as crossed.
func (s *strip) findCrossed() {
	s.crossed = make([]bool, len(s.p))
	free := 0
	j := 0
	for i := range s.p {
		for ; j < len(s.v) && s.v[j].t < s.p[i].t; j++ {
			s.crossed[i] = s.crossed[i] || s.own(j)
		}
		if s.plain(i) {
			free++
		}
	}
	if free == 0 {
		clear(s.crossed)
	}
}

// sinusCycle is the median interval between neighbouring sinus P waves.
func (s *strip) sinusCycle() tick.Dur {
	var d []tick.Dur
	for i := range s.p {
		if s.plain(i) {
			d = append(d, s.pp(i))
		}
	}
	return medianDur(d)
}

// conductedCycle is the median interval between neighbouring conducted beats.
func (s *strip) conductedCycle() tick.Dur {
	var d []tick.Dur
	for i := 1; i < len(s.v); i++ {
		if !s.own(i) && !s.own(i-1) && !s.p[s.v[i].p].premature && !s.p[s.v[i-1].p].premature {
			d = append(d, s.rr(i))
		}
	}
	return medianDur(d)
}

// window is how many sinus intervals before a beat make the cycle it is held
// against: the heart rate drifts over a long strip.
const window = 8

// localCycles gives, for each P, the median of the last sinus intervals before
// it, or the median of the whole strip where there are fewer than three.
func (s *strip) localCycles() []tick.Dur {
	local := make([]tick.Dur, len(s.p)+1)
	var last []tick.Dur
	for i := range local {
		local[i] = s.cycle0
		if len(last) >= 3 {
			local[i] = medianDur(last)
		}
		if i < len(s.p) && s.plain(i) {
			last = append(last, s.pp(i))
			last = last[max(0, len(last)-window):]
		}
	}
	return local
}

// judge marks premature beats and the P waves that met what a beat from
// elsewhere had left refractory.
func (s *strip) judge() {
	s.findCrossed()
	s.cycle0 = s.sinusCycle()
	s.local = s.localCycles()
	s.noise = s.sinusNoise()
	for i := range s.p {
		s.p[i].premature = s.prematureP(i, s.local[i])
	}
	conducted := s.conductedCycle()
	s.conducts = s.anyConducted()
	var all []tick.Dur
	for i := 1; i < len(s.v); i++ {
		all = append(all, s.rr(i))
	}
	usual := medianDur(all)
	i := 0
	for j := range s.v {
		for i < len(s.p) && s.p[i].t < s.v[j].t {
			i++
		}
		expected := conducted
		if l := s.local[i]; l > 0 && (s.conducts || j > 0 && s.followsAtrium(j-1)) {
			expected = l
		}
		s.v[j].premature = s.prematureV(j, expected, usual)
	}
	for i := range s.p {
		s.p[i].interfered = s.interference(i)
	}
}

// sinusNoise is twice the median change of the sinus interval from beat to beat:
// no interval can be judged more finely than the node keeps time.
func (s *strip) sinusNoise() tick.Dur {
	var d []tick.Dur
	for i := 2; i < len(s.p); i++ {
		if s.plain(i) && s.plain(i-1) {
			c := s.pp(i) - s.pp(i-1)
			d = append(d, max(c, -c))
		}
	}
	return min(2*medianDur(d), s.cycle0/10)
}

func (s *strip) anyConducted() bool {
	return slices.ContainsFunc(s.p, func(w pwave) bool { return w.to >= 0 && !w.retrograde })
}

// prematureP: a P that is not the sinus node's own and comes early, against the
// run it belongs to where there is one, else against the sinus cycle.
func (s *strip) prematureP(i int, sinus tick.Dur) bool {
	if i == 0 || !s.descending(i) || s.pOrigin(i) == fromSinus || s.byDevice(s.p[i].id) || s.driven(i) {
		return false
	}
	if i >= 2 && s.sameSource(i, i-1) && s.sameSource(i, i-2) {
		return early(s.pp(i), s.pp(i-1))
	}
	if i >= 2 && s.sameSource(i, i-1) && i+1 < len(s.p) && s.sameSource(i, i+1) && !early(s.pp(i), s.pp(i+1)) {
		return false // second of a run of three or more
	}
	if i+2 < len(s.p) && s.sameSource(i, i+1) && s.sameSource(i, i+2) {
		return early(s.pp(i), sinus) && early(s.pp(i), s.pp(i+1)) // a run begins
	}
	return sinus > 0 && s.pp(i) < sinus-max(pauseTolerance, s.noise)
}

func (s *strip) sameSource(i, j int) bool {
	return s.pOrigin(i) == s.pOrigin(j) && s.sourceSite(s.p[i].id) == s.sourceSite(s.p[j].id) && s.descending(j)
}

// prematureV: a beat that began below the atria before the next one from above
// was due. A focus that fires no faster than escape rhythms do is not premature
// even so: the beat from above is late. Where nothing conducts, early is against
// the usual RR. A run of three or more has its own name; its first beat is premature
// only if it comes early for the run itself.
func (s *strip) prematureV(i int, expected, usual tick.Dur) bool {
	if i == 0 || !s.own(i) || s.begunByDevice(i) {
		return false
	}
	limit := tick.PerMinute(50) // escape limits as in rhythmName
	if s.vOrigin(i) == fromJunction {
		limit = tick.PerMinute(60)
	}
	switch {
	case s.vOrigin(i) != fromStimulus && s.rr(i) >= limit:
		return false
	case expected > 0 && s.rr(i) >= expected-max(pauseTolerance, s.noise):
		return false
	case expected == 0 && !early(s.rr(i), usual):
		return false
	}
	switch {
	case s.linked(i-1, i):
		return !s.linked(i-2, i-1) && !s.linked(i, i+1)
	case s.linked(i, i+1) && s.linked(i+1, i+2):
		return early(s.rr(i), s.rr(i+1))
	}
	return true
}

// linked tells whether beats i and j are neighbours of one run below the atria.
func (s *strip) linked(i, j int) bool {
	return i >= 0 && j < len(s.v) && s.own(i) && s.own(j) && s.begunByDevice(i) == s.begunByDevice(j) && s.sourceSite(s.v[i].id) == s.sourceSite(s.v[j].id)
}

// interference: the P was blocked, at the deepest level it reached, in tissue
// that something other than an ordinary P before it had left refractory. Such a
// P had no opportunity to conduct and says nothing about block.
func (s *strip) interference(i int) bool {
	w := &s.p[i]
	if w.to >= 0 {
		return false
	}
	if len(w.blocks) == 0 && (w.met || w.septum == 0 && s.septum != event.None) {
		return true // its wave ended inside the atria
	}
	for _, id := range s.deepest(i) {
		e := s.log.At(id)
		switch e.Rule {
		case event.Collision:
			return true
		case event.PathRefractory, event.SiteRefractory:
			b := s.log.At(s.mark[id].blocker)
			if b != nil && s.foreign(b) {
				return true
			}
		}
	}
	return false
}

// foreign tells whether an event belongs to anything but an ordinary P on its way down.
func (s *strip) foreign(b *event.Event) bool {
	p := s.mark[b.ID].p
	return b.Dir == event.Up || b.Rule == event.Fired || b.Rule == event.Captured || p < 0 || s.p[p].premature || s.p[p].retrograde
}

// deepest are the blocks of a P that stopped its impulse for good: those in the
// His-Purkinje system if it reached the His bundle, else those above.
func (s *strip) deepest(i int) []event.ID {
	w := &s.p[i]
	var ids []event.ID
	for _, id := range w.blocks {
		if (w.his != 0) == (s.levelOf(id) != levelNode) {
			ids = append(ids, id)
		}
	}
	if len(ids) == 0 {
		return w.blocks
	}
	return ids
}
