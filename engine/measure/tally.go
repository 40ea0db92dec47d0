package measure

import (
	"slices"
	"strconv"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Tally is what a strip comes to in a few numbers: the part of a report that a search
// over thousands of strips needs, by the same definitions and without its sentences.
// Intervals of 0 are none.
type Tally struct {
	Ps, QRSs int // P waves from above; QRS complexes

	// Pattern is the shortest row of P waves from above, led to a ventricular beat or
	// not, that repeats over the last half of the strip: "4:3", P waves to beats.
	// "varies" where none repeats twice there, "none" with fewer than four P waves.
	Pattern string

	VV                 tick.Dur // mean interval between QRS complexes
	VVLeast, VVLongest tick.Dur
	Longest            tick.Dur // without QRS, to an end of the strip too
	AVLeast, AVLongest tick.Dur // from a P or atrial stimulus to the beat that came of it

	AS, AP, VS, VP   int
	Synchronous      int // QRS complexes, as in Device
	Fusion           int
	LostA, LostV     int
	ModeChanges      int
	Vulnerable       int // ventricular stimuli while ventricular muscle recovers unevenly
	LoopTurns        int // of the longest loop
	LoopEnd          LoopEnd
	LoopCycle        tick.Dur // median, of the longest loop
	Synchrony        int      // atrial stimuli that met what a P from below left refractory, in rows of two or more
	SynchronyAtClose bool     // the last two atrial stimuli of the strip are such
}

// LoopEnd tells how the longest endless loop of a strip went.
type LoopEnd uint8

const (
	NoLoop        LoopEnd = iota
	LoopBrief             // fewer turns than make a loop
	LoopEnded             // three turns or more, then cured or blocked
	LoopSustained         // to the end of the strip
)

var loopEnds = [...]string{"none", "brief", "ended", "sustained"}

func (e LoopEnd) String() string { return loopEnds[e] }

// Reader tallies many logs one after the other, in the same memory. The zero Reader is
// ready. Use it from one goroutine.
type Reader struct {
	tracer tracer
	device device
	flags  []bool // by P from above
	led    []bool // by P: the device gave a ventricular stimulus for it
	turns  []turn
	cycle  []tick.Dur
}

// Tally reads a log that [event.Validate] accepts.
func (r *Reader) Tally(l *event.Log) Tally {
	s := r.tracer.read(l)
	s.dev = s.readDeviceInto(&r.device)
	t := Tally{QRSs: len(s.v)}
	for i := range s.p {
		if s.descending(i) {
			t.Ps++
		}
	}
	r.settled(s, &t)
	t.intervals(s)
	t.Vulnerable = s.vulnerable()
	if s.dev != nil {
		t.device(s)
		f := &finder{strip: s}
		r.loop(f, &t)
		t.synchrony(f)
	}
	return t
}

// answered tells whether a P led to a ventricular beat: by conduction, or because the
// device tracked it or paced it.
func (s *strip) answered(i int, byDevice []bool) bool {
	return s.p[i].to >= 0 && !s.begunByDevice(int(s.p[i].to)) || byDevice[i]
}

// settled finds the row that repeats.
func (r *Reader) settled(s *strip, t *Tally) {
	led := room(r.led, len(s.p))
	r.led = led
	clear(led)
	if s.dev != nil {
		for i := range s.dev.markers {
			m := &s.dev.markers[i]
			if !m.paced() || m.e.Channel != 'V' {
				continue
			}
			if a := s.dev.marker(m.e.Cause); a != nil && a.e.Channel == 'A' && a.wave >= 0 {
				led[a.wave] = true
			}
		}
	}
	r.flags = r.flags[:0]
	for i := range s.p {
		if s.descending(i) && s.log.Span.Sub(s.p[i].t) > settling {
			r.flags = append(r.flags, s.answered(i, led))
		}
	}
	t.Pattern = repeating(r.flags[len(r.flags)/2:])
}

// settling is how long after a P its beat may be due: the end of the strip is cut off
// by so much.
const settling = 800 * tick.Millisecond

// repeating names the shortest row that repeats over all the flags, twice at least.
func repeating(flags []bool) string {
	if len(flags) < 4 {
		return "none"
	}
	for n := 1; 2*n <= len(flags); n++ {
		if slices.Equal(flags[n:], flags[:len(flags)-n]) {
			vs := 0
			for _, f := range flags[:n] {
				if f {
					vs++
				}
			}
			return strconv.Itoa(n) + ":" + strconv.Itoa(vs)
		}
	}
	return "varies"
}

func (t *Tally) intervals(s *strip) {
	for j := 1; j < len(s.v); j++ {
		d := s.rr(j)
		t.VVLongest = max(t.VVLongest, d)
		if t.VVLeast == 0 || d < t.VVLeast {
			t.VVLeast = d
		}
	}
	if n := len(s.v); n > 1 {
		t.VV = s.v[n-1].t.Sub(s.v[0].t) / tick.Dur(n-1)
	}
	r := Device{}
	s.longest(&r)
	t.Longest = tick.MS(r.Longest)
	for i := range s.p {
		if s.descending(i) && s.p[i].to >= 0 && !s.begunByDevice(int(s.p[i].to)) {
			t.av(s.pr(i))
		}
	}
}

func (t *Tally) av(d tick.Dur) {
	t.AVLongest = max(t.AVLongest, d)
	if t.AVLeast == 0 || d < t.AVLeast {
		t.AVLeast = d
	}
}

func (t *Tally) device(s *strip) {
	r := &Device{}
	for i := range s.dev.markers {
		m := &s.dev.markers[i]
		r.count(m)
		if !m.paced() || m.e.Channel != 'V' || !m.beat {
			continue
		}
		if a := s.dev.marker(m.e.Cause); a != nil && a.e.Channel == 'A' && (a.paced() || a.e.Use == event.Tracked) {
			t.av(m.e.T.Sub(a.e.T))
		}
	}
	t.AS, t.AP, t.VS, t.VP, t.LostA, t.LostV = r.AS, r.AP, r.VS, r.VP, r.LostA, r.LostV
	t.ModeChanges = len(s.dev.changes)
	if t.ModeChanges > 0 && s.dev.changes[0].T == 0 {
		t.ModeChanges-- // the mode it began with
	}
	t.Synchronous = s.synchronousCount()
	for j := range s.v {
		if s.v[j].fusion && s.dev.vp[j] >= 0 {
			t.Fusion++
		}
	}
}

// loop tells of the longest endless loop; of two as long, the later.
func (r *Reader) loop(f *finder, t *Tally) {
	r.turns = f.turnsInto(r.turns[:0])
	all := r.turns
	for i := 0; i < len(all); {
		j := i + 1
		for j < len(all) && all[j].from >= 0 && f.madeBy(all[j-1].vp, all[j].from) {
			j++
		}
		if n := j - i; n >= t.LoopTurns {
			t.LoopTurns = n
			cycle := r.cycle[:0]
			for k := i + 1; k < j; k++ {
				cycle = append(cycle, all[k].vp.e.T.Sub(all[k-1].vp.e.T))
			}
			t.LoopCycle, r.cycle = medianDur(cycle), cycle
			switch how, _ := f.loopEnd(all[j-1]); {
			case n < leastTurns:
				t.LoopEnd = LoopBrief
			case how == toTheEnd:
				t.LoopEnd = LoopSustained
			default:
				t.LoopEnd = LoopEnded
			}
		}
		i = j
	}
}

func (t *Tally) synchrony(f *finder) {
	row := 0
	for i := range f.dev.markers {
		ap := &f.dev.markers[i]
		if !ap.paced() || ap.e.Channel != 'A' {
			continue
		}
		if _, _, _, ok := f.synchronyBefore(ap); !ok {
			row = 0
			continue
		}
		if row++; row == 2 {
			t.Synchrony += 2
		} else if row > 2 {
			t.Synchrony++
		}
	}
	t.SynchronyAtClose = row >= 2
}

// vulnerable counts ventricular stimuli, of the device or planned, that come while
// some ventricular muscle of the beat before has recovered and some has not: after the
// first of its refractory periods has ended and before the last. Excitability is
// uneven then, which is what makes a stimulus about the T wave dangerous (Han and Moe,
// Circ Res 1964;14:44; Wiggers and Wegria 1940; both from memory).
func (s *strip) vulnerable() int {
	n := 0
	s.eachVulnerable(func(*event.Event, int32) { n++ })
	return n
}

// eachVulnerable calls found with each such stimulus and the QRS that it follows.
func (s *strip) eachVulnerable(found func(e *event.Event, wave int32)) {
	wave := int32(-1)
	var first, last tick.Time
	for i := range s.log.Events {
		e := &s.log.Events[i]
		switch {
		case e.Kind == event.Activate && s.log.Sites[e.Site].Tissue == event.Ventricle:
			if w := s.mark[e.ID].wave; w != wave {
				wave, first, last = w, e.Until, e.Until
			}
			first, last = min(first, e.Until), max(last, e.Until)
		case e.Kind == event.Stimulus && wave >= 0 && e.T > first && e.T < last && s.ventricularStimulus(e):
			found(e, wave)
		}
	}
}

func (s *strip) ventricularStimulus(e *event.Event) bool {
	switch s.log.Sites[e.Site].Tissue {
	case event.Ventricle, event.Purkinje, event.His:
		return true
	}
	return e.Channel == 'V'
}
