package study

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// beat is the first depolarisation of a chamber in one wave.
type beat struct {
	t  tick.Time
	id event.ID
}

// apart is how long after another depolarisation of the chamber one must come to be of
// another beat: longer than neighbouring regions of one wave are apart.
const apart = 60 * tick.Millisecond

// beats lists those of a chamber.
func beats(log *event.Log, chamber byte) []beat {
	var out []beat
	last := tick.Time(-1 << 40)
	for i := range log.Events {
		e := &log.Events[i]
		if e.Kind != event.Activate || log.Sites[e.Site].Chamber() != chamber {
			continue
		}
		if e.T.Sub(last) > apart {
			out = append(out, beat{e.T, e.ID})
		}
		last = e.T
	}
	return out
}

// same is how much two intervals may differ and count as equal.
const same = 2 * tick.Millisecond

// pause says what became of the beats after the extra one.
func (t *trial) pause() {
	chamber := byte('V')
	if t.tissue(t.s) == event.Atrium || t.tissue(t.s) == event.Sinus {
		chamber = 'A'
	}
	var before, next *beat
	with := beats(t.with, chamber)
	for i := range with {
		switch b := &with[i]; {
		case b.t < t.s.T:
			before = b
		case !t.own[b.id] && next == nil:
			next = b
		}
	}
	var after []beat // without it
	for _, b := range beats(t.without, chamber) {
		if b.t >= t.s.T {
			after = append(after, b)
		}
	}
	if before == nil || next == nil || len(after) < 2 {
		return
	}
	around := next.t.Sub(before.t)
	t.o.Events = append(t.o.Events, next.id)
	reset := t.reset()
	switch origin := t.with.Origin(next.id); {
	case reset:
		t.pauseSlug = "reset"
		full := after[1].t.Sub(before.t)
		t.brief("resets the sinus node")
		t.say("It reached the sinus node and began its cycle anew: the next beat comes %s after the extra one, and the pause is %s.", ms(next.t.Sub(t.s.T)), compared(around, full))
	case fromSame(origin, t.without.Origin(after[0].id)):
		t.pauseSlug = "interpolated"
		t.brief("interpolated")
		t.say("It is interpolated: the next beat, %s after it, is the one that would have come anyway; none is lost.", ms(next.t.Sub(t.s.T)))
	case fromSame(origin, t.without.Origin(after[1].id)):
		t.pauseSlug = "compensatory"
		t.brief("full compensatory pause")
		t.say("The next beat that would have come is lost and the one after it comes in its time: a full compensatory pause, %s around the extra beat.", ms(around))
	default:
		t.say("The next beat comes %s after the extra one; the beats around it are %s apart, %s without it.", ms(next.t.Sub(t.s.T)), ms(around), ms(after[0].t.Sub(before.t)))
	}
}

func compared(around, full tick.Dur) string {
	switch d := full - around; {
	case d > same:
		return fmt.Sprintf("not compensatory, %s short of it", ms(d))
	case d < -same:
		return fmt.Sprintf("%s longer than compensatory", ms(-d))
	}
	return "as long as a compensatory one"
}

// fromSame tells whether two impulses, of the two records, are one: the same focus or
// timer at the same time.
func fromSame(a, b *event.Event) bool {
	return a != nil && b != nil && a.Kind == b.Kind && a.Site == b.Site && max(a.T.Sub(b.T), b.T.Sub(a.T)) <= same
}

// reset tells whether the impulse began the sinus node's cycle anew.
func (t *trial) reset() bool {
	sinus := t.with.Site("sinus")
	for i := int(t.s.ID); i < len(t.with.Events); i++ {
		if e := &t.with.Events[i]; e.Kind == event.Discharge && e.Site == sinus {
			return t.own[e.Cause]
		}
	}
	return false
}

// rounds of a re-entry: an impulse that comes to one site so often goes round.
const rounds = 3

// circling is an impulse that comes to the same site again and again.
type circling struct {
	origin event.ID
	site   event.SiteID
	times  []tick.Time
	device bool // by stimuli of the device that track its own impulse
}

// goesRound finds an impulse that comes to one site at least so often after a time. A
// stimulus that tracks a signal goes on with the impulse that made the signal.
func goesRound(log *event.Log, after tick.Time, least int, only event.ID) *circling {
	origin := make([]event.ID, len(log.Events)+1)
	device := make([]bool, len(log.Events)+1)
	type key struct {
		origin event.ID
		site   event.SiteID
	}
	seen := map[key]*circling{}
	var best *circling
	for i := range log.Events {
		e := &log.Events[i]
		tracks := e.Kind == event.Stimulus && e.Rule == event.Timed && (e.Field == "av_delay" || e.Field == "upper_rate")
		origin[e.ID] = e.ID
		if c := log.At(e.Cause); c != nil && e.Cause < e.ID && (tracks && c.Kind == event.Sense || e.Kind == event.Activate || e.Kind == event.Block || e.Kind == event.Sense) {
			origin[e.ID], device[e.ID] = origin[e.Cause], device[e.Cause] || tracks
		}
		if e.Kind != event.Activate || e.T < after || only != 0 && origin[e.ID] != only {
			continue
		}
		k := key{origin[e.ID], e.Site}
		c := seen[k]
		if c == nil {
			c = &circling{origin: k.origin, site: k.site}
			seen[k] = c
		}
		c.times = append(c.times, e.T)
		c.device = c.device || device[e.ID]
		if len(c.times) >= least && (best == nil || len(c.times) > len(best.times)) {
			best = c
		}
	}
	return best
}

func (c *circling) cycle() tick.Dur {
	n := len(c.times)
	return c.times[n-1].Sub(c.times[n-2])
}

// settled is how long after the extra beat a rhythm counts as what came of it.
const settled = 1000 * tick.Millisecond

// rhythm says whether the beat began a re-entry or ended one.
func (t *trial) rhythm() {
	later := t.s.T.Add(settled)
	was := goesRound(t.without, later, rounds, 0)
	is := goesRound(t.with, later, rounds, 0)
	own := goesRound(t.with, t.s.T, 2, t.s.ID)
	switch {
	case was != nil && is == nil:
		t.rhythmSlug = "ended"
		t.brief("ends the tachycardia")
		t.say("Without it an impulse goes on round with a cycle of %s; with it that ends.", ms(was.cycle()))
	case was != nil:
		t.rhythmSlug = "goes_on"
		t.brief("the tachycardia goes on")
		t.say("An impulse goes round with a cycle of %s before and after it.", ms(is.cycle()))
	case own == nil:
	case len(own.times) >= rounds && own.device:
		t.rhythmSlug = "started_loop"
		t.brief("starts an endless loop")
		t.say("It starts a loop through the device: conducted back, sensed, tracked, and so on, with a cycle of %s, %d times on this strip.", ms(own.cycle()), len(own.times))
	case len(own.times) >= rounds:
		t.rhythmSlug = "started"
		t.brief(fmt.Sprintf("starts a tachycardia, cycle %s", ms(own.cycle())))
		t.say("Its impulse goes round: %d times through the %s, the last with a cycle of %s.", len(own.times), t.with.Sites[own.site].Label, ms(own.cycle()))
	case !own.device:
		t.rhythmSlug = "echo"
		t.brief("echo beat")
		t.say("Its impulse came back once to the %s, %s later (an echo beat).", t.with.Sites[own.site].Label, ms(own.cycle()))
	}
}
