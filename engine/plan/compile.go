package plan

import (
	"errors"
	"fmt"
	"sort"
	"strings"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// rampStep is how often a gradual change of anything but a rate takes effect.
const rampStep = 100 * tick.Millisecond

// maxSteps bounds the parameter sets of all gradual changes together.
const maxSteps = 5000

// Compile makes the plan ready to run. The error, a [Diagnoses], says which
// numbers cannot hold together.
func (p *Plan) Compile() (*Program, error) { return p.compile(nil, nil) }

// compile takes the heart that was made of the same numbers, where there is one, and
// the nodes that were solved before.
func (p *Plan) compile(known *heart.Heart, solved *heart.Solutions) (*Program, error) {
	c := &compiler{plan: p, prog: &Program{Span: p.span(), Seed: uint64(p.number("seed"))}}
	c.heart = func(q *Plan) *heart.Heart {
		n := q.numbers(c.rate)
		n.Solved = solved
		h, err := heart.New(n)
		var u *heart.Unmet
		if errors.As(err, &u) {
			c.ds.add("heart."+u.Part, u.Text, "", u.Note)
		}
		return h
	}
	if c.prog.Heart = known; known == nil {
		c.prog.Heart = c.heart(p)
	}
	if c.prog.Heart == nil {
		return nil, c.ds
	}
	c.prog.Device = p.device(c.prog.Heart)
	if c.prog.Device != nil {
		for _, f := range c.prog.Device.Settings.Faults() {
			c.ds.add(device, f, "", "")
		}
	}
	c.stimuli()
	c.faults()
	c.changes()
	if err := c.ds.err(); err != nil {
		return nil, err
	}
	return c.prog, nil
}

type compiler struct {
	plan  *Plan
	prog  *Program
	heart func(*Plan) *heart.Heart
	ds    Diagnoses
}

func focusPath(i int, name string) string { return fmt.Sprintf("heart.foci[%d].%s", i, name) }

func (it Item) at() tick.Time { return tick.Time(tick.MS(it.number("interventions", "at_ms"))) }

// rate lays out the course of a rate: where it starts, and every intervention
// that sets it.
func (c *compiler) rate(path string, bpm float64) heart.Rate {
	r := heart.Constant(bpm)
	for _, it := range c.sets() {
		if it["field"].Text != path {
			continue
		}
		t, to := it.at(), it["to"].Number
		over := tick.MS(it.number("interventions", "over_ms"))
		// A change that begins before the last one has ended takes over from there.
		now := r.At(t)
		for len(r) > 1 && r[len(r)-1].T > t {
			r = r[:len(r)-1]
		}
		r = append(r, heart.Knot{T: t, BPM: now}, heart.Knot{T: t.Add(over), BPM: to})
	}
	return r
}

// sets are the interventions that change a number, in order of time.
func (c *compiler) sets() []Item {
	var out []Item
	for _, it := range c.plan.Interventions {
		if it["do"].Text == "set" {
			out = append(out, it)
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].at() < out[j].at() })
	return out
}

func (c *compiler) stimuli() {
	for _, it := range c.plan.Interventions {
		site := c.prog.Heart.Site(it["site"].Text)
		t := it.at()
		switch it["do"].Text {
		case "stimulate":
			c.prog.Stimuli = append(c.prog.Stimuli, Stimulus{t, site, event.Premature})
		case "train":
			cycle := tick.MS(it["cycle_ms"].Number)
			for range int(it["count"].Number) {
				c.prog.Stimuli = append(c.prog.Stimuli, Stimulus{t, site, event.Train})
				t = t.Add(cycle)
			}
			t = t.Add(-cycle)
			for _, coupling := range it["extras_ms"].List {
				t = t.Add(tick.MS(coupling))
				c.prog.Stimuli = append(c.prog.Stimuli, Stimulus{t, site, event.Premature})
			}
		}
	}
}

// faults lays out what is wrong with the device, and signals that come from no heart.
func (c *compiler) faults() {
	for _, it := range c.plan.Interventions {
		f := Fault{T: it.at(), Channel: pacer.Ventricular}
		if it["channel"].Text == "A" {
			f.Channel = pacer.Atrial
		}
		end := f
		end.T = f.T.Add(tick.MS(it["for_ms"].Number))
		switch it["do"].Text {
		case "lose_capture":
			f.Lost, end.Lost = 1, -1
		case "undersense":
			f.Deaf, end.Deaf = 1, -1
		case "fracture":
			f.Lost, end.Lost, f.Deaf, end.Deaf = 1, -1, 1, -1
		case "dislodge":
			f.Moved, f.Site = true, c.prog.Heart.Site(it["site"].Text)
			c.prog.Faults = append(c.prog.Faults, f)
			continue
		case "signal":
			f.Signal = true
			for range max(int(it["count"].Number), 1) {
				c.prog.Faults = append(c.prog.Faults, f)
				f.T = f.T.Add(tick.MS(it["cycle_ms"].Number))
			}
			continue
		default:
			continue
		}
		c.prog.Faults = append(c.prog.Faults, f, end)
	}
	sort.SliceStable(c.prog.Faults, func(i, j int) bool { return c.prog.Faults[i].T < c.prog.Faults[j].T })
}

// changes prepares a heart for every moment at which a number changes.
func (c *compiler) changes() {
	sets := c.sets()
	if len(sets) == 0 {
		return
	}
	now := c.plan.Clone()
	steps := 0
	for _, it := range sets {
		field := it["field"].Text
		name, item := itemPath(field)
		ch := Change{T: it.at(), Field: field, To: c.to(it)}
		if strings.HasPrefix(name, device+".") {
			now.set(name, item, it["to"])
			ch.Device = now.device(c.prog.Heart)
			c.prog.Changes = append(c.prog.Changes, ch)
			continue
		}
		if byPath[name].Unit == "/min" {
			c.prog.Changes = append(c.prog.Changes, ch)
			continue
		}
		from := now.Or(name, 0)
		if item >= 0 {
			from = now.item(name, item).number(listOf(name), leafOf(name))
		}
		count := max(1, int(tick.MS(it.number("interventions", "over_ms"))/rampStep))
		if steps += count; steps > maxSteps {
			c.ds.add("interventions", fmt.Sprintf("gradual changes over %d steps of %v ms", steps, rampStep), fmt.Sprintf("up to %d steps in all", maxSteps), "shorten over_ms")
			return
		}
		for k := 1; k <= count; k++ {
			v := it["to"]
			if count > 1 {
				v = Value{Number: from + (it["to"].Number-from)*float64(k)/float64(count)}
			}
			now.set(name, item, v)
			if ch.Heart = c.heart(now); ch.Heart == nil || len(ch.Heart.Paths) != len(c.prog.Heart.Paths) {
				return
			}
			c.prog.Changes = append(c.prog.Changes, ch)
			ch = Change{T: ch.T.Add(rampStep)}
		}
	}
	sort.SliceStable(c.prog.Changes, func(i, j int) bool { return c.prog.Changes[i].T < c.prog.Changes[j].T })
}

func (c *compiler) to(it Item) string {
	s := show(it["to"].raw())
	if over := it.number("interventions", "over_ms"); over > 0 {
		s += " over " + plainNumber(over) + " ms"
	}
	return s
}

// set puts a value at a path; "default" takes away what stands there.
func (p *Plan) set(path string, item int, v Value) {
	switch {
	case item >= 0:
		p.item(path, item)[leafOf(path)] = v
	case v.Text == "default":
		delete(p.values, path)
	default:
		p.values[path] = v
	}
}
