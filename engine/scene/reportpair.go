package scene

import (
	"fmt"
	"slices"
)

// Comparison is what a page of two strips says: one above the other on axes that
// agree, and in what they differ.
type Comparison struct {
	Title         string
	Parts         [2]Part
	Differences   []Difference
	Date, Version string
}

// Part is one of two strips.
type Part struct {
	Name, Title, Statement string // Name: "before", "after"
	Strip                  Excerpt
}

// Pages lays the comparison out. Both strips stand on the first page; where their lanes
// are too high for that even with low ladders, the leads that say least go first, and
// where that does not help each strip has a page of its own.
func (c *Comparison) Pages(p Paper) ([]*Scene, error) {
	b, err := newBook(p, c.Title, c.Date, c.Version)
	if err != nil {
		return nil, err
	}
	b.heading("", "")
	if err := b.pair(&c.Parts); err != nil {
		return nil, err
	}
	b.flow(differences(b.paper.body(), c.Parts[0].Name, c.Parts[1].Name, c.Differences), 1)
	return b.close(), nil
}

// pair sets one line of each strip, with the same margin, so that equal times since
// the beginning stand one above the other.
func (b *book) pair(parts *[2]Part) error {
	var os [2]Options
	var heads [2]rowLine
	left := 0.0
	for i := range parts {
		e := &parts[i].Strip
		if e.In.Log == nil {
			return fmt.Errorf("scene: a comparison without its strip %d", i+1)
		}
		os[i], _ = b.fit(*e)
		left = max(left, os[i].Margin)
		heads[i] = head(&parts[i], b.paper.body())
	}
	for i := range parts {
		o, e := &os[i], &parts[i].Strip
		o.Margin = left
		end := o.From.Add(fits(b.paper.body()+pad-left, o.MMPerS))
		if o.To == 0 || o.To > end {
			o.To = end
		}
		o.To = min(o.To, e.In.Log.Span)
	}
	room := b.bottom - b.y - heads[0].height - heads[1].height - 20 // scales and signs
	asked := os[0].leadLanes()
	systems, fits, err := b.two(parts, &os, room)
	for err == nil && !fits {
		fewer := os
		if !Fewer(&fewer[0]) || !Fewer(&fewer[1]) {
			break // a page for each
		}
		os = fewer
		systems, fits, err = b.two(parts, &os, room)
	}
	if err != nil {
		return err
	}
	for i, s := range systems {
		b.need(heads[i].height + s.Height)
		for _, m := range heads[i].marks {
			m.X, m.Y = m.X+b.paper.Margin, m.Y+b.y
			b.put(m)
		}
		b.y += heads[i].height
		b.embed(s, b.paper.Margin-pad, b.y-pad)
		b.y += s.Height - pad + 1.5
	}
	in, o := parts[0].Strip.In, os[0]
	if parts[1].Strip.In.Diagram != nil && parts[1].Strip.In.Diagram.Device != nil {
		in, o = parts[1].Strip.In, os[1]
	}
	gone := ""
	kept := os[0].leadLanes()
	for _, name := range asked {
		if !slices.Contains(kept, name) {
			gone += ", " + name
		}
	}
	if gone != "" {
		gone = "Left out for want of room: " + gone[2:] + ". "
	}
	b.explain(in, o, gone)
	return nil
}

// two draws both strips, with ladders as low as it takes to fit the room together, and
// tells whether they do.
func (b *book) two(parts *[2]Part, os *[2]Options, room float64) ([2]*Scene, bool, error) {
	var out [2]*Scene
	for share := 1.0; ; share -= 0.1 {
		total, least := 0.0, true
		for i := range parts {
			o := os[i]
			if units := ladderUnits(&parts[i].Strip); units > 0 {
				low := leastRung * units
				if share*o.LadderMM > low {
					o.LadderMM, least = share*o.LadderMM, false
				} else {
					o.LadderMM = min(o.LadderMM, low)
				}
			}
			s, err := b.system(parts[i].Strip, o)
			if err != nil {
				return out, false, fmt.Errorf("strip %d: %w", i+1, err)
			}
			out[i] = s
			total += s.Height - pad + 1.5
		}
		if total <= room || least {
			return out, total <= room, nil
		}
	}
}

func head(p *Part, w float64) rowLine {
	title := p.Name
	if p.Title != "" {
		if title != "" {
			title += ": "
		}
		title += p.Title
	}
	l := stack(cell{class: Heading, text: title, w: w}, cell{class: Body, text: p.Statement, w: w})
	l.height += 0.8
	return l
}

// differences are set over the whole width: they hold sentences.
func differences(w float64, before, after string, ds []Difference) []rowLine {
	const label, each = 0.46, 0.19
	row := func(c Class, name, a, b, change string) rowLine {
		return rowOf(cell{class: Body, text: name, w: label*w - partGap},
			cell{class: c, text: a, x: label * w, w: each*w - 2*partGap},
			cell{class: c, text: b, x: (label + each) * w, w: each*w - 2*partGap},
			cell{class: Strong, text: change, x: (label + 2*each) * w, w: (1 - label - 2*each) * w})
	}
	var rows []rowLine
	group := ""
	for _, d := range ds {
		if d.Group != group {
			group = d.Group
			head := rowOf(cell{class: Strong, text: group, w: w})
			head.keep = true
			rows = append(rows, rowLine{height: 0.8, gap: true, keep: true}, head)
		}
		name := d.Label
		if d.Unit != "" {
			name += ", " + d.Unit
		}
		rows = append(rows, row(Body, name, d.Before, d.After, d.Change))
	}
	if len(rows) == 0 {
		return nil
	}
	names := row(Note, "", before, after, "")
	names.keep = true
	return section(w, "Differences", "", append([]rowLine{names}, rows...))
}
