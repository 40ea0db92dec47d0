// Package study tries things on a plan and says what came of them: one extra beat
// ([Extra]), and one swept through the cycle ([Scan]).
//
// An outcome is read from the record, with the record of the same plan without the
// extra beat beside it: whether the stimulus captured, how far its impulse went and
// where it was blocked, what it did to the pause after it, and whether it began or
// ended a re-entry. Terms are the trade's: a pause is compensatory where the sinus node
// was not disturbed, so that the beats around the pause stand two cycles apart.
package study

import (
	"fmt"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Outcome is what came of an extra beat.
type Outcome struct {
	Slug      string     // stable: "blocked_node+reset"
	Text      string     // in a few words, for the sheet
	Sentences []string   // in full
	Events    []event.ID // that show it, the stimulus first
	MissedBy  tick.Dur   // how much later it would have captured or conducted; 0 where it did, or that is not the reason
	Passage   tick.Dur   // from the stimulus to the other chamber; 0 where it was not reached
	AH        tick.Dur   // from the low septal atrium to the His bundle; 0 where that was not reached from above
}

// Extra says what came of the planned stimulus in the log with it, given the log of the
// same plan without it. It returns nil where the id is no planned stimulus.
func Extra(with, without *event.Log, stimulus event.ID) *Outcome {
	s := with.At(stimulus)
	if s == nil || s.Kind != event.Stimulus || s.Rule == event.Timed {
		return nil
	}
	t := trial{with: with, without: without, s: s, o: &Outcome{Events: []event.ID{stimulus}}}
	if !s.Captured {
		t.lost()
		return t.o
	}
	t.own = descent(with, stimulus)
	t.reach()
	t.rhythm()
	if t.rhythmSlug == "" {
		t.pause()
	}
	t.o.Slug = join(t.reachSlug, t.pauseSlug, t.rhythmSlug)
	return t.o
}

func join(parts ...string) string {
	var out []string
	for _, p := range parts {
		if p != "" {
			out = append(out, p)
		}
	}
	return strings.Join(out, "+")
}

// trial is an outcome in the making.
type trial struct {
	with, without *event.Log
	s             *event.Event
	own           []bool // events of the impulse that the stimulus began, by place in the log
	o             *Outcome

	reachSlug, pauseSlug, rhythmSlug string
}

func (t *trial) say(format string, args ...any) {
	t.o.Sentences = append(t.o.Sentences, fmt.Sprintf(format, args...))
}

// brief adds words to the text for the sheet.
func (t *trial) brief(words string) {
	if t.o.Text != "" {
		t.o.Text += "; "
	}
	t.o.Text += words
}

// ms writes a span in whole milliseconds, one decimal below ten.
func ms(d tick.Dur) string {
	if d < 10*tick.Millisecond && d%tick.Millisecond != 0 {
		return fmt.Sprintf("%.1f ms", d.MS())
	}
	return fmt.Sprintf("%.0f ms", d.MS())
}

func (t *trial) lost() {
	where := t.with.Sites[t.s.Site].Label
	t.o.Slug = "no_capture"
	if m := t.s.MissedBy(); m > 0 {
		t.o.MissedBy = m
		t.brief(fmt.Sprintf("no capture, %s too early", ms(m)))
		t.say("It did not capture: the %s had been depolarised %s before and is refractory for %s. %s later it would have captured.", where, ms(t.s.Recovery), ms(t.s.Needed), ms(m))
		return
	}
	t.brief("no capture")
	t.say("It did not capture at the %s.", where)
}

// descent marks the events of the impulse that an event began.
func descent(log *event.Log, from event.ID) []bool {
	own := make([]bool, len(log.Events)+1)
	own[from] = true
	for i := int(from); i < len(log.Events); i++ {
		e := &log.Events[i]
		own[e.ID] = own[e.Cause] && (e.Kind == event.Activate || e.Kind == event.Block) && e.Cause != 0
	}
	return own
}

// first is the first event of the impulse that a test holds for, or nil.
func (t *trial) first(test func(e *event.Event) bool) *event.Event {
	for i := int(t.s.ID); i < len(t.with.Events); i++ {
		if e := &t.with.Events[i]; t.own[e.ID] && test(e) {
			return e
		}
	}
	return nil
}

func (t *trial) tissue(e *event.Event) event.Tissue { return t.with.Sites[e.Site].Tissue }

func activates(log *event.Log, tissue event.Tissue) func(*event.Event) bool {
	return func(e *event.Event) bool { return e.Kind == event.Activate && log.Sites[e.Site].Tissue == tissue }
}

// reach says how far the impulse went.
func (t *trial) reach() {
	if t.tissue(t.s) == event.Atrium || t.tissue(t.s) == event.Sinus {
		t.down()
		return
	}
	t.up()
}

// down: an atrial beat, through the AV node to the ventricles.
func (t *trial) down() {
	his := t.first(activates(t.with, event.His))
	if his != nil {
		t.o.AH = his.T.Sub(t.septum(his))
	}
	v := t.first(activates(t.with, event.Ventricle))
	if v == nil {
		t.stopped(event.Down)
		return
	}
	t.o.Events = append(t.o.Events, v.ID)
	t.o.Passage = v.T.Sub(t.s.T)
	t.reachSlug = "conducted"
	way := ""
	for e := v; e != nil && e.ID != t.s.ID; e = t.with.At(e.Cause) {
		if e.Path < 0 {
			continue
		}
		switch p := &t.with.Paths[e.Path]; {
		case p.Name == "av_slow":
			t.reachSlug, way = "conducted_slow", " by the slow pathway"
		case p.Tissue == event.Accessory:
			t.reachSlug, way = "conducted_accessory", " by the accessory pathway"
		}
	}
	t.brief(fmt.Sprintf("conducted%s, AV %s", way, ms(t.o.Passage)))
	text := fmt.Sprintf("It captured and was conducted to the ventricles%s in %s", way, ms(t.o.Passage))
	if t.o.AH > 0 {
		text += fmt.Sprintf(" (AH %s)", ms(t.o.AH))
	}
	t.say("%s.", text)
	t.aberrant()
}

// septum is when the impulse that reached the His bundle was at the low septum.
func (t *trial) septum(his *event.Event) tick.Time {
	for e := his; e != nil && e.ID != t.s.ID; e = t.with.At(e.Cause) {
		if t.tissue(e) == event.Atrium {
			return e.T
		}
	}
	return his.T
}

// aberrant tells of a bundle branch that did not let the beat pass.
func (t *trial) aberrant() {
	for _, side := range [...]string{"right", "left"} {
		b := t.first(func(e *event.Event) bool {
			return e.Kind == event.Block && e.Dir == event.Down && e.Path >= 0 && (e.Rule == event.PathRefractory || e.Rule == event.SiteRefractory) &&
				t.with.Sites[t.with.Paths[e.Path].To].Name == side+"_bundle"
		})
		if b == nil {
			continue
		}
		t.reachSlug += "+" + side + "_bundle_block"
		t.brief(side + " bundle branch block")
		t.o.Events = append(t.o.Events, b.ID)
		t.say("The %s bundle branch was refractory%s: it is conducted with %s bundle branch block (aberrantly).", side, short(b), side)
	}
}

// up: a ventricular beat, back to the atria. One from the conduction system is treated
// alike.
func (t *trial) up() {
	a := t.first(activates(t.with, event.Atrium))
	if a == nil {
		t.stopped(event.Up)
		return
	}
	t.o.Events = append(t.o.Events, a.ID)
	t.o.Passage = a.T.Sub(t.s.T)
	t.reachSlug = "conducted_back"
	t.brief(fmt.Sprintf("conducted back, VA %s", ms(t.o.Passage)))
	t.say("It captured and was conducted back to the atria in %s.", ms(t.o.Passage))
}

// stopped finds the block that decided: the one that the impulse came furthest to.
func (t *trial) stopped(dir event.Dir) {
	var last *event.Event
	rank := func(e *event.Event) int {
		r := 0
		switch t.with.Paths[e.Path].Tissue {
		case event.Node:
			r = 1
		case event.His:
			r = 2
		case event.Purkinje:
			r = 3
		}
		if dir == event.Up && r > 0 {
			r = 4 - r
		}
		return r
	}
	for i := int(t.s.ID); i < len(t.with.Events); i++ {
		e := &t.with.Events[i]
		if !t.own[e.ID] || e.Kind != event.Block || e.Dir != dir || e.Path < 0 || rank(e) == 0 {
			continue
		}
		if last == nil || rank(e) > rank(last) || rank(e) == rank(last) && e.MissedBy() < last.MissedBy() {
			last = e
		}
	}
	if last == nil {
		t.reachSlug = "stayed"
		t.brief("captured, went no further")
		t.say("It captured and its impulse went no further.")
		return
	}
	t.o.Events = append(t.o.Events, last.ID)
	p := &t.with.Paths[last.Path]
	level := map[event.Tissue]string{event.Node: "node", event.His: "his", event.Purkinje: "his_purkinje"}[p.Tissue]
	where := map[event.Tissue]string{event.Node: "the AV node", event.His: "the His bundle", event.Purkinje: "the His-Purkinje system"}[p.Tissue]
	whither := "downwards"
	if dir == event.Up {
		whither = "on the way back"
	}
	switch last.Rule {
	case event.Collision:
		t.reachSlug = "collided_" + level
		t.brief("met another impulse in " + where)
		t.say("It captured; in %s its impulse met another one that came the other way, and both ended.", where)
	case event.OneWay:
		t.reachSlug = "one_way_" + level
		t.brief("captured; " + where + " does not conduct " + whither)
		t.say("It captured; %s does not conduct %s.", where, whither)
	default:
		t.o.MissedBy = last.MissedBy()
		t.reachSlug = "blocked_" + level
		if dir == event.Up {
			t.reachSlug += "_up"
		}
		t.brief("blocked in " + where + short(last))
		t.say("It captured and was blocked in %s %s%s.", where, whither, short(last))
		if last.Depth > 0 && last.Depth < 1000 {
			t.say("It entered %d%% of the way and left that refractory (concealed conduction).", (int(last.Depth)+5)/10)
		}
	}
}

func short(e *event.Event) string {
	if m := e.MissedBy(); m > 0 {
		return ", missed by " + ms(m)
	}
	return ""
}
