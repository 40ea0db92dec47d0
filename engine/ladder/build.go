package ladder

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// beat is how far back an activation of the His-Purkinje system may lie and
// still belong to the same beat as a ventricular activation.
const beat = 150 * tick.Millisecond

// Build draws the ladder of a log. The log should be valid ([event.Validate]).
func Build(l *event.Log, o Options) *Diagram {
	if o.Form == 0 {
		o.Form = Full
	}
	b := &builder{l: l, lay: newLayout(l, o.Form), ws: findWaves(l)}
	b.d = &Diagram{Form: o.Form, Span: l.Span, Tiers: append([]Tier(nil), b.lay.tiers...)}
	b.choose()
	for i := range l.Events {
		b.event(&l.Events[i])
	}
	for i := range b.ws.all {
		b.wave(&b.ws.all[i])
	}
	b.measure()
	b.d.Device = device(l)
	return b.d
}

type builder struct {
	l    *event.Log
	lay  *layout
	ws   *waves
	d    *Diagram
	draw []bool // by event id: a conducted activation or a block to be drawn
}

func (b *builder) event(e *event.Event) {
	if e.Site < 0 || b.hidden(e) {
		return
	}
	tissue := b.l.Sites[e.Site].Tissue
	mark := Mark{Event: e.ID, T: e.T, Y: b.origin(e), Tissue: tissue, Branch: b.lay.branch[e.Site]}
	switch e.Kind {
	case event.Discharge:
		mark.Sign = Focus
		b.d.Marks = append(b.d.Marks, mark)
	case event.Stimulus:
		mark.Sign = Stimulus
		if e.Captured {
			mark.Sign = Capture
		}
		b.d.Marks = append(b.d.Marks, mark)
	case event.Activate:
		if b.draw[e.ID] {
			b.stroke(e)
		}
	case event.Block:
		if b.draw[e.ID] {
			b.block(e)
		}
	}
}

// hidden tells whether an event lies in a part that the plain form leaves out.
func (b *builder) hidden(e *event.Event) bool {
	if b.d.Form != Plain {
		return false
	}
	return b.l.Sites[e.Site].Tissue == event.Sinus || e.Path >= 0 && b.l.Paths[e.Path].Tissue == event.Sinus
}

// origin is where a focus or a stimulus stands: in the ventricles at the foot of
// the tier, from where its wave goes up.
func (b *builder) origin(e *event.Event) float64 {
	if b.l.Sites[e.Site].Chamber() == 'V' {
		return b.lay.vFoot
	}
	return b.lay.y[e.Site]
}

func (b *builder) stroke(e *event.Event) {
	from, p := b.l.At(e.Cause), &b.l.Paths[e.Path]
	b.d.Strokes = append(b.d.Strokes, Stroke{Event: e.ID, T0: from.T, Y0: b.leaves(from), T1: e.T, Y1: b.arrives(e),
		Tissue: p.Tissue, Branch: b.lay.side(p), End: Arrived})
}

func (b *builder) block(e *event.Event) {
	bar := Mark{Sign: Bar, Event: e.ID, T: e.T, Y: b.origin(e), Tissue: b.l.Sites[e.Site].Tissue, Missed: e.MissedBy()}
	from := b.l.At(e.Cause)
	if e.Path < 0 || from == nil || from.Kind != event.Activate {
		bar.Up = bar.Y == b.lay.vFoot
		b.d.Marks = append(b.d.Marks, bar)
		return
	}
	p := &b.l.Paths[e.Path]
	y0, y1 := b.leaves(from), b.lay.y[p.Exit(e.Dir)]
	bar.Y = y0 + float64((y1-y0)*float64(e.Depth))/1000
	bar.Tissue, bar.Branch, bar.Label, bar.Up = p.Tissue, b.lay.side(p), b.part(p), y1 < y0
	s := Stroke{Event: e.ID, T0: from.T, Y0: y0, T1: e.T, Y1: bar.Y, Tissue: p.Tissue, Branch: bar.Branch, End: Blocked}
	if e.Rule == event.Collision {
		s.End = Collided
	}
	if s.T1 > s.T0 && s.Y0 != s.Y1 {
		b.d.Strokes = append(b.d.Strokes, s)
	}
	if e.Rule == event.Collision {
		return
	}
	b.d.Marks = append(b.d.Marks, bar)
	if e.Rule == event.PathRefractory && e.Depth > 0 && e.Depth < 1000 && e.Needed > 0 {
		tail := bar
		tail.Sign, tail.Label, tail.Missed, tail.Until = Tail, "", 0, e.T.Add(e.Needed)
		b.d.Marks = append(b.d.Marks, tail)
	}
}

// part names the part that blocked where the tier holds several.
func (b *builder) part(p *event.Path) string {
	switch {
	case p.Tissue == event.Accessory:
		return "pathway"
	case p.Name == "av_slow":
		return "slow"
	case p.Tissue != event.Purkinje:
		return ""
	}
	for _, end := range [...]event.SiteID{p.To, p.From} {
		switch b.l.Sites[end].Name {
		case "right_bundle":
			return "RBB"
		case "left_bundle":
			return "LBB"
		case "left_anterior":
			return "LAF"
		case "left_posterior":
			return "LPF"
		case "left_septal":
			return "LSF"
		}
	}
	return ""
}

// arrives is the height at which an activation is reached; leaves the height
// from which its impulse goes on. They differ in ventricular muscle only.
func (b *builder) arrives(e *event.Event) float64 {
	w := b.ws.of[e.ID]
	if w < 0 || b.ws.all[w].chamber != 'V' {
		return b.lay.y[e.Site]
	}
	switch b.ws.all[w].entries[b.ws.member[e.ID]] {
	case above, beside:
		return b.lay.vTop
	}
	return b.leaves(e)
}

func (b *builder) leaves(e *event.Event) float64 {
	w := b.ws.of[e.ID]
	if w < 0 || b.ws.all[w].chamber != 'V' {
		return b.lay.y[e.Site]
	}
	v := &b.ws.all[w]
	p := b.spread(v, v.top[b.ws.member[e.ID]])
	return p.at(e.T)
}
