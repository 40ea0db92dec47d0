package pacer

import (
	"fmt"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// rig runs a device against signals planned by hand and a heart that may answer its
// stimuli. It keeps a record and faults the device for windows that do not fit.
type rig struct {
	t       faulter
	d       *Device
	now     tick.Time
	ids     event.ID
	plan    []planned
	record  []entry
	windows []recorded
	byID    map[event.ID]int
	when    []tick.Time      // of every event, by id
	newest  [windowCount]int // 1 + index of the last window of a name
	modes   []string
	// paced, if set, answers a stimulus.
	paced func(p Pulse)
	// sensed, if set, is told what became of a signal.
	sensed func(ch Channel, s Sensed)
}

type planned struct {
	at tick.Time
	ch Channel
	do func() // something of the heart, before signals; nil: a signal
}

// entry is AP, VP or a signal: AS, VS with what the device did.
type entry struct {
	at    tick.Time
	what  string
	timer Timer
	lead  Lead
	use   event.Use
	id    event.ID
	cause event.ID
}

type recorded struct {
	Window
	from  tick.Time
	by    event.ID
	ended bool
}

// faulter is a test or a property.
type faulter interface {
	Errorf(format string, args ...any)
	Fatalf(format string, args ...any)
}

func newRig(t faulter, s Settings) *rig {
	r := &rig{t: t, byID: map[event.ID]int{}}
	r.d = New(s, r)
	return r
}

func (r *rig) next() event.ID { r.ids++; r.when = append(r.when, r.now); return r.ids }

func (r *rig) Stimulate(p Pulse) event.ID {
	id := r.next()
	what := "VP"
	if p.Lead == RA {
		what = "AP"
	}
	if p.Lead == 0 || p.Timer == 0 {
		r.t.Errorf("%v: stimulus without lead or timer: %+v", r.now, p)
	}
	if p.Cause >= id {
		r.t.Errorf("%v: %s caused by %d, which is not earlier than %d", r.now, what, p.Cause, id)
	}
	r.record = append(r.record, entry{at: r.now, what: what, timer: p.Timer, lead: p.Lead, id: id, cause: p.Cause})
	if r.paced != nil {
		r.paced(p)
	}
	return id
}

func (r *rig) Open(w Window) event.ID {
	id := r.next()
	if w.Until <= r.now || w.Name == 0 || w.Name >= windowCount || w.Cause >= id {
		r.t.Errorf("%v: window %+v", r.now, w)
	}
	if i := r.newest[w.Name]; i > 0 && r.windows[i-1].Until > r.now {
		r.t.Errorf("%v: a second %v while one runs until %v", r.now, w.Name, r.windows[i-1].Until)
	}
	r.newest[w.Name] = len(r.windows) + 1
	r.byID[id] = len(r.windows)
	r.windows = append(r.windows, recorded{Window: w, from: r.now})
	return id
}

func (r *rig) Close(window, by event.ID) {
	i, ok := r.byID[window]
	if !ok || r.windows[i].ended || r.windows[i].Until <= r.now {
		r.t.Errorf("%v: window %d cannot be closed", r.now, window)
		return
	}
	if by == 0 || r.when[by-1] != r.now {
		r.t.Errorf("%v: %v closed by %d, which is not an event of now\n%s\n%q", r.now, r.windows[i].Name, by, r.text(r.now.MS()-3000), r.modes)
	}
	r.windows[i].ended, r.windows[i].by, r.windows[i].Until = true, by, r.now
}

func (r *rig) Mode(from, to, why string, cause event.ID) event.ID {
	r.modes = append(r.modes, fmt.Sprintf("%v %s-%s %s", r.now, from, to, why))
	return r.next()
}

// at plans signals at times in milliseconds.
func (r *rig) at(ch Channel, ms ...float64) *rig {
	for _, m := range ms {
		r.signal(ch, tick.Time(tick.MS(m)))
	}
	return r
}

// every plans signals from a time to the end of a strip.
func (r *rig) every(ch Channel, from, step, end float64) *rig {
	for t := from; t < end; t += step {
		r.at(ch, t)
	}
	return r
}

func (r *rig) signal(ch Channel, at tick.Time)   { r.add(planned{at: at, ch: ch}) }
func (r *rig) heart(at tick.Time, do func())     { r.add(planned{at: at, do: do}) }
func (r *rig) soon(ms float64, do func())        { r.heart(r.now.Add(tick.MS(ms)), do) }
func (r *rig) soonSignal(ch Channel, ms float64) { r.signal(ch, r.now.Add(tick.MS(ms))) }

func (r *rig) add(p planned) {
	i := len(r.plan)
	for i > 0 && before(p, r.plan[i-1]) {
		i--
	}
	r.plan = append(r.plan, planned{})
	copy(r.plan[i+1:], r.plan[i:])
	r.plan[i] = p
}

// before orders the plan: at one instant the heart, the atrium, the ventricle.
func before(p, q planned) bool {
	if p.at != q.at {
		return p.at < q.at
	}
	return p.ch < q.ch
}

// run lives to the end of a strip of so many milliseconds.
func (r *rig) run(ms float64) *rig {
	end := tick.Time(tick.MS(ms))
	r.d.Start(0)
	for {
		due := r.d.Due()
		if len(r.plan) > 0 && r.plan[0].at <= due {
			p := r.plan[0]
			if p.at > end {
				return r
			}
			r.plan = r.plan[1:]
			r.now = p.at
			if p.do != nil {
				p.do()
				continue
			}
			r.sense(p.ch)
			continue
		}
		if due > end {
			return r
		}
		if due < r.now {
			r.t.Fatalf("due at %v, now %v", due, r.now)
		}
		r.now = due
		n := len(r.record)
		r.d.Expire(due)
		if len(r.record) > n+8 {
			r.t.Fatalf("%v: the device does not come to rest", r.now)
		}
	}
}

func (r *rig) sense(ch Channel) {
	id := r.next()
	i := len(r.record)
	r.record = append(r.record, entry{at: r.now, what: map[Channel]string{Atrial: "AS", Ventricular: "VS"}[ch], id: id})
	s := r.d.Sense(r.now, ch, id)
	r.record[i].use = s.Use
	if s.Use == 0 {
		r.t.Errorf("%v: a signal without use", r.now)
	}
	if r.sensed != nil {
		r.sensed(ch, s)
	}
}

// text is the record from a time on: "800 AP, 950 VS inhibits".
func (r *rig) text(fromMS float64) string {
	var b strings.Builder
	for _, e := range r.record {
		if e.at.MS() < fromMS {
			continue
		}
		if b.Len() > 0 {
			b.WriteString(", ")
		}
		fmt.Fprintf(&b, "%v %s", e.at, e.what)
		if e.use != 0 {
			b.WriteString(" " + e.use.String())
		}
	}
	return b.String()
}

// times are the instants in milliseconds of one kind of event: AP, VP, or a signal
// with one of these uses.
func (r *rig) times(what string, uses ...event.Use) []float64 {
	var ts []float64
	for _, e := range r.record {
		ok := e.what == what && len(uses) == 0
		for _, u := range uses {
			ok = ok || e.what == what && e.use == u
		}
		if ok {
			ts = append(ts, e.at.MS())
		}
	}
	return ts
}

// intervals are the distances between neighbours.
func intervals(ts []float64) []float64 {
	var out []float64
	for i := 1; i < len(ts); i++ {
		out = append(out, ts[i]-ts[i-1])
	}
	return out
}

// ms is a length by milliseconds.
func ms(n float64) tick.Dur { return tick.MS(n) }
