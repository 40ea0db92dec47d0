package measure

import (
	"math"
	"slices"

	"escapement/engine/event"
	"escapement/engine/tick"
)

func ms(d tick.Dur) *float64 { v := d.MS(); return &v }

func msIf(ok bool, d tick.Dur) *float64 {
	if !ok {
		return nil
	}
	return ms(d)
}

// since is the span from event a to event b, null if either is absent.
func (s *strip) since(a, b event.ID) *float64 {
	x, y := s.log.At(a), s.log.At(b)
	if x == nil || y == nil {
		return nil
	}
	return ms(y.T.Sub(x.T))
}

// beats merges the P waves and the QRS complexes by time.
func (s *strip) beats(surf *surface) []Beat {
	out := make([]Beat, 0, len(s.p)+len(s.v))
	first := s.firstBundles()
	for i, j := 0, 0; i < len(s.p) || j < len(s.v); {
		if j == len(s.v) || i < len(s.p) && s.p[i].t <= s.v[j].t {
			out = append(out, s.pBeat(i, surf))
			i++
		} else {
			out = append(out, s.vBeat(j, surf, first))
			j++
		}
	}
	return out
}

func (s *strip) pBeat(i int, surf *surface) Beat {
	w := &s.p[i]
	b := Beat{
		T: w.t, Kind: "P", ID: w.id, Origin: s.pOrigin(i), Begun: s.mark[w.id].origin, Roots: w.roots,
		Conducted: w.to >= 0, Premature: w.premature, Retrograde: w.retrograde, Interfered: w.interfered,
		Blocks: nonNil(w.blocks), PP: msIf(i > 0, s.pp(i)),
	}
	if w.from >= 0 {
		b.From = s.v[w.from].id
	}
	if w.to >= 0 {
		b.To = s.v[w.to].id
		if !s.begunByDevice(int(w.to)) && !s.arrival(i) { // else its QRS began before it arrived
			b.PR = ms(s.pr(i))
		}
	} else if w.his != 0 || len(w.blocks) > 0 {
		b.Level = s.level(i)
	}
	b.PA = s.since(w.id, w.septum)
	if !w.retrograde {
		b.AH = s.since(w.septum, w.his)
	}
	b.VA = s.va(i)
	if s.dev != nil {
		b.Paced, b.DeviceID = s.dev.seen(s.dev.ap[i], s.dev.as[i])
	}
	surf.p(i, &b)
	return b
}

// seen is how the device had a wave: by a stimulus of its own or by a signal.
func (d *device) seen(stimulus, signal int32) (paced bool, id event.ID) {
	if m := d.at(stimulus); m != nil {
		return true, m.e.ID
	}
	if m := d.at(signal); m != nil {
		return false, m.e.ID
	}
	return false, 0
}

// va is the time from the first ventricular activation to the right atrium
// (design: VA time). For a P that came up without passing the ventricles, as in
// re-entry in the AV node, it is counted from the QRS of the same activation of the
// AV junction, which may come after it, or else from the latest QRS up to half a
// second before.
func (s *strip) va(i int) *float64 {
	w := &s.p[i]
	if !w.retrograde {
		return nil
	}
	end := w.ra
	if end == 0 {
		end = w.id
	}
	if w.from >= 0 {
		return s.since(s.v[w.from].id, end)
	}
	if j := s.sister(i); j >= 0 {
		return s.since(s.v[j].id, end)
	}
	at := s.log.At(end).T
	j, _ := slices.BinarySearchFunc(s.v, at, func(v vwave, t tick.Time) int { return int(v.t - t) })
	if j > 0 && at.Sub(s.v[j-1].t) <= tick.Second/2 {
		return ms(at.Sub(s.v[j-1].t))
	}
	return nil
}

// firstBundles gives, by His activation, the first activation of a bundle it led to.
func (s *strip) firstBundles() []event.ID {
	first := make([]event.ID, len(s.mark))
	for i := range s.log.Events {
		e := &s.log.Events[i]
		if e.Kind == event.Activate && s.log.Sites[e.Site].Tissue == event.Purkinje {
			if c := s.log.At(e.Cause); c.Kind == event.Activate && c.Site == s.his && first[c.ID] == 0 {
				first[c.ID] = e.ID
			}
		}
	}
	return first
}

func (s *strip) vBeat(j int, surf *surface, first []event.ID) Beat {
	w := &s.v[j]
	b := Beat{
		T: w.t, Kind: "QRS", ID: w.id, Origin: s.vOrigin(j), Begun: s.mark[w.id].origin, Roots: w.roots,
		Conducted: w.p >= 0, Premature: w.premature || (w.p >= 0 && s.p[w.p].premature), Fusion: w.fusion,
		Blocks: []event.ID{}, RR: msIf(j > 0, s.rr(j)),
	}
	if w.p >= 0 {
		p := &s.p[w.p]
		b.From = p.id
		b.PR = msIf(!s.arrival(int(w.p)), w.t.Sub(p.t))
		b.returned = p.retrograde
		if !p.retrograde && w.his != 0 && s.mark[w.his].p == w.p {
			b.AH = s.since(p.septum, w.his)
			b.PA = s.since(p.id, p.septum)
		}
	}
	if w.retro >= 0 {
		b.To = s.p[w.retro].id
		b.VA = s.va(int(w.retro))
	}
	if w.his != 0 && s.leads(j) {
		b.HV = s.since(w.his, w.id)
		b.H = s.since(w.his, first[w.his])
	}
	if s.dev != nil {
		b.Paced, b.DeviceID = s.dev.seen(s.dev.vp[j], s.dev.vs[j])
	}
	surf.v(j, s.rr(j), &b)
	return b
}

func nonNil(ids []event.ID) []event.ID {
	if ids == nil {
		return []event.ID{}
	}
	return ids
}

// leads tells whether the His activation by which a QRS came lies on the way to it: in
// antidromic re-entry it is the retrograde one of the beat before.
func (s *strip) leads(j int) bool {
	w := &s.v[j]
	return w.p < 0 || s.log.At(w.his).T >= s.p[w.p].t
}

// summarise takes medians over the beats. PR is that of P waves from above; waves of
// flutter and fibrillation have no PR, and what is no P wave has no P duration or axis.
func (s *strip) summarise(beats []Beat) Summary {
	pick := func(kind string, get func(*Beat) *float64) []float64 {
		var v []float64
		for i := range beats {
			if beats[i].Kind == kind || kind == "" {
				if x := get(&beats[i]); x != nil {
					v = append(v, *x)
				}
			}
		}
		return v
	}
	sum := Summary{PCount: len(s.p), QRSCount: len(s.v)}
	for i := range s.p {
		if s.p[i].to >= 0 && s.descending(i) {
			sum.Conducted++
		}
	}
	sum.PRate = rate(pick("P", func(b *Beat) *float64 { return b.PP }))
	sum.VRate = rate(pick("QRS", func(b *Beat) *float64 { return b.RR }))
	if s.fibrillating() {
		sum.VRate = meanRate(pick("QRS", func(b *Beat) *float64 { return b.RR }))
	}
	waves := s.waves()
	own := func(get func(*Beat) *float64) func(*Beat) *float64 {
		return func(b *Beat) *float64 {
			if waves[b.ID] {
				return get(b)
			}
			return nil
		}
	}
	sum.PR = median(pick("QRS", func(b *Beat) *float64 {
		if waves[b.From] && !b.returned {
			return b.PR
		}
		return nil
	}))
	sum.P = median(pick("P", own(func(b *Beat) *float64 { return b.PDur })))
	sum.QRS = median(pick("QRS", func(b *Beat) *float64 { return b.QRS }))
	sum.QT = median(pick("QRS", func(b *Beat) *float64 { return b.QT }))
	sum.AH = median(pick("P", own(func(b *Beat) *float64 { return b.AH })))
	sum.HV = median(pick("QRS", func(b *Beat) *float64 { return b.HV }))
	sum.VA = median(pick("P", func(b *Beat) *float64 { return b.VA }))
	sum.PAxis = middleAngle(pick("P", own(func(b *Beat) *float64 { return b.Axis })))
	sum.QRSAxis = middleAngle(pick("QRS", func(b *Beat) *float64 { return b.Axis }))
	sum.Bazett = median(pick("QRS", func(b *Beat) *float64 { return b.Bazett }))
	sum.Fridericia = median(pick("QRS", func(b *Beat) *float64 { return b.Fridericia }))
	sum.Framingham = median(pick("QRS", func(b *Beat) *float64 { return b.Framingham }))
	sum.Hodges = median(pick("QRS", func(b *Beat) *float64 { return b.Hodges }))
	return sum
}

// waves are the P waves that no driver of the atria made, by id.
func (s *strip) waves() map[event.ID]bool {
	own := make(map[event.ID]bool, len(s.p))
	for i := range s.p {
		own[s.p[i].id] = !s.driven(i)
	}
	return own
}

// fibrillating tells whether most of the atrial waves are those of fibrillation.
func (s *strip) fibrillating() bool {
	n := 0
	for i := range s.p {
		if s.arrival(i) {
			n++
		}
	}
	return 2*n > len(s.p)
}

// median rounds to a thousandth, a microsecond where v is in milliseconds.
func median(v []float64) *float64 {
	if len(v) == 0 {
		return nil
	}
	slices.Sort(v)
	m := v[len(v)/2]
	if len(v)%2 == 0 {
		m = (v[len(v)/2-1] + m) / 2
	}
	m = math.Round(m*1000) / 1000
	return &m
}

// meanRate is the rate of the mean interval, as beats are counted over a strip.
func meanRate(intervals []float64) *float64 {
	sum := 0.0
	for _, x := range intervals {
		sum += x
	}
	return rate([]float64{sum / float64(max(len(intervals), 1))})
}

func rate(intervals []float64) *float64 {
	m := median(intervals)
	if m == nil || *m <= 0 {
		return nil
	}
	r := math.Round(6e6 / *m) / 100
	return &r
}

// middleAngle is the median of angles in degrees, taken on the circle around the
// first of them.
func middleAngle(v []float64) *float64 {
	if len(v) == 0 {
		return nil
	}
	first := v[0]
	turned := make([]float64, len(v))
	for i, a := range v {
		turned[i] = wrap(a - first)
	}
	m := math.Round(wrap(*median(turned)+first)*10) / 10
	return &m
}

// wrap brings an angle into (-180, 180].
func wrap(a float64) float64 {
	a = math.Mod(a, 360)
	if a <= -180 {
		a += 360
	} else if a > 180 {
		a -= 360
	}
	return a
}
