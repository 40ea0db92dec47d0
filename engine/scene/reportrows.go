package scene

import "strings"

// rowLine is a piece of a column that is not broken: a heading, or a row.
type rowLine struct {
	height float64
	keep   bool // stays with what follows
	gap    bool // empty; dropped at the top of a column
	marks  []Mark
}

// cell is a text in a row: from Start, or up to End, in so many millimetres.
type cell struct {
	class Class
	text  string
	x, w  float64
	right bool
}

// rowOf sets cells side by side; each wraps in its own width.
func rowOf(cells ...cell) rowLine {
	var l rowLine
	for _, c := range cells {
		h := c.class.height(reportFont)
		y := 0.0
		for _, line := range wrap(c.class, c.text, reportFont, c.w) {
			m := Mark{Shape: Text, Class: c.class, X: c.x, Y: y + ascent*Body.height(reportFont), Text: line}
			if c.right {
				m.X, m.Anchor = c.x+c.w, End
			}
			l.marks = append(l.marks, m)
			y += leading * max(h, Note.height(reportFont))
		}
		l.height = max(l.height, y)
	}
	return l
}

// section is a heading with its rows.
func section(width float64, heading, note string, rows []rowLine) []rowLine {
	if len(rows) == 0 {
		return nil
	}
	head := rowOf(cell{class: Heading, text: heading, w: width})
	head.keep = true
	out := []rowLine{{height: 2, gap: true}, head}
	if note != "" {
		n := rowOf(cell{class: Note, text: note, w: width})
		n.keep = true
		out = append(out, n)
	}
	return append(out, rows...)
}

// partGap stands between the parts of a row, mm.
const partGap = 1.2

// quantity sets a row of name, value, unit and normal range; the value ends at a share
// of the width, so that values stand below one another.
func quantity(w, ends float64, name, strong Class, label, value, unit, normal string) rowLine {
	v := max(strong.Width(value, reportFont), 8) + 0.1
	x := ends * w
	u := 0.0
	if unit != "" {
		u = Note.Width(unit, reportFont) + 0.1
	}
	return rowOf(
		cell{class: name, text: label, w: x - v - partGap},
		cell{class: strong, text: value, x: x - v, w: v, right: true},
		cell{class: Note, text: unit, x: x + partGap, w: u},
		cell{class: Note, text: normal, x: x + u + 2*partGap, w: w - x - u - 2*partGap, right: true})
}

// word sets a row of a name and a text.
func word(w float64, name, strong Class, label, value string) rowLine {
	l := min(max(name.Width(label, reportFont)+0.1, 0.3*w), 0.45*w)
	return rowOf(cell{class: name, text: label, w: l}, cell{class: strong, text: value, x: l + 2*partGap, w: w - l - 2*partGap, right: true})
}

// Values of readings end at one share of the width, those of settings, whose names are
// longer, at another.
const readingEnds, settingEnds = 0.5, 0.62

func readings(w float64, heading, note string, rs []Reading) []rowLine {
	var rows []rowLine
	for _, r := range rs {
		class, normal := Body, r.Normal
		if normal != "" {
			normal = "normal " + normal
		}
		if r.Outside {
			class = Strong
			normal = "outside " + r.Normal
		}
		rows = append(rows, quantity(w, readingEnds, Body, class, r.Label, r.Value, r.Unit, normal))
	}
	return section(w, heading, note, rows)
}

func settings(w float64, ss []Setting) []rowLine {
	var rows []rowLine
	group := ""
	for _, s := range ss {
		if s.Group != group {
			group = s.Group
			head := rowOf(cell{class: Strong, text: group, w: w})
			head.keep = true
			rows = append(rows, rowLine{height: 0.8, gap: true}, head)
		}
		class, quiet, label := Body, Body, s.Label
		switch s.State {
		case Changed:
			class, label = Strong, "* "+label
		case Assumed:
			class, quiet = Note, Note
		}
		if s.Word {
			rows = append(rows, word(w, quiet, class, label, s.Value))
		} else {
			rows = append(rows, quantity(w, settingEnds, quiet, class, label, s.Value, s.Unit, s.Normal))
		}
	}
	return section(w, "Settings", "* and bold: other than the default. Grey: assumed, not stated. Right: normal or usual range.", rows)
}

func remarks(w float64, fs []Remark) []rowLine {
	var rows []rowLine
	for _, f := range fs {
		parts := []cell{{class: Body, text: f.Text, w: w}}
		if f.Note != "" {
			parts = append(parts, cell{class: Note, text: f.Note, x: 3, w: w - 3})
		}
		if len(f.Rivals) > 0 {
			parts = append(parts, cell{class: Note, text: "Would look the same: " + strings.Join(f.Rivals, "; ") + ".", x: 3, w: w - 3})
		}
		rows = append(rows, spaced(stack(parts...)))
	}
	return section(w, "Findings", "", rows)
}

func sources(w float64, ts []string) []rowLine {
	var rows []rowLine
	for _, t := range ts {
		rows = append(rows, rowOf(cell{class: Note, text: t, w: w}))
	}
	return section(w, "Sources of the normal ranges", "", rows)
}

func warnings(w float64, ws []string) []rowLine {
	var rows []rowLine
	for _, t := range ws {
		rows = append(rows, rowOf(cell{class: BlockLabel, text: "! " + t, w: w}))
	}
	return section(w, "Warnings", "", rows)
}

func sums(w float64, ss []Sum) []rowLine {
	const value = 0.26
	var rows []rowLine
	for _, s := range ss {
		first := rowOf(cell{class: Body, text: s.Label, w: (1 - value) * w},
			cell{class: Strong, text: strings.TrimSpace(s.Value + " " + s.Unit), x: (1-value)*w + partGap, w: value*w - partGap, right: true})
		how := s.Formula
		if s.Numbers != "" {
			how += ": " + s.Numbers
		}
		rows = append(rows, spaced(under(first, rowOf(cell{class: Note, text: how, x: 3, w: w - 3}))))
	}
	return section(w, "Arithmetic", "", rows)
}

// stack sets cells one below the other, as one piece.
func stack(cells ...cell) rowLine {
	var l rowLine
	for _, c := range cells {
		l = under(l, rowOf(c))
	}
	return l
}

// under puts a row below another, as one piece.
func under(a, b rowLine) rowLine {
	for _, m := range b.marks {
		m.Y += a.height
		a.marks = append(a.marks, m)
	}
	a.height += b.height
	return a
}

// spaced is a row with a little room below it.
func spaced(l rowLine) rowLine {
	l.height += 0.6
	return l
}
