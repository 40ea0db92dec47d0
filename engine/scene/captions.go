package scene

import (
	"sort"

	"escapement/engine/ladder"
)

// captions places the texts of the bars by priority.
func (v *watch) captions() {
	sort.SliceStable(v.texts, func(i, j int) bool {
		a, b := v.texts[i].w, v.texts[j].w
		if a.Priority != b.Priority {
			return a.Priority > b.Priority
		}
		return a.T0 < b.T0
	})
	for i := range v.texts {
		c := &v.texts[i]
		c.from = len(v.over)
		v.caption(c.w, c.texts)
		c.to = len(v.over)
	}
	v.thin()
}

// thin takes back the texts of a name of which fewer than three in five had room,
// except of the timers that differ from those before them.
func (v *watch) thin() {
	type kind struct {
		name    string
		hearing ladder.Hearing
	}
	type count struct{ tried, placed int }
	counts := map[kind]*count{} // only looked up
	for i := range v.texts {
		c := &v.texts[i]
		k := kind{c.w.Name, c.w.Hearing}
		n := counts[k]
		if n == nil {
			n = &count{}
			counts[k] = n
		}
		n.tried++
		if c.to > c.from {
			n.placed++
		}
	}
	if len(v.texts) == 0 {
		return
	}
	kept := v.over[:v.texts[0].from]
	for i := range v.texts {
		c := &v.texts[i]
		if n := counts[kind{c.w.Name, c.w.Hearing}]; 5*n.placed < 3*n.tried && !c.w.Differs {
			continue
		}
		kept = append(kept, v.over[c.from:c.to]...)
	}
	v.over = kept
}

// words are the texts that a bar may carry, the fullest first. A timer that an event
// ended has none: its length is not the device's, and stands in the ladder as PP, RR
// or PR. An AV delay is told by its place, between the marks of both chambers.
func words(w *ladder.Window) []string {
	value := ms(w.T1.Sub(w.T0))
	switch {
	case w.Hearing == ladder.Deaf:
		return nil // no text on hatching
	case w.Hearing != ladder.Timer && (w.Ended || w.Cut || w.Name == "av_delay"):
		return []string{w.Label}
	case w.Hearing != ladder.Timer && w.Why != "":
		return []string{w.Label + " " + value + " " + w.Why, w.Label + " " + value, value}
	case w.Hearing != ladder.Timer:
		return []string{w.Label + " " + value, w.Label}
	case w.Cut, w.Ended && w.Name != "av_delay":
		return nil
	case w.Held != 0:
		return []string{value + "+" + ms(w.Held.Sub(w.T1)), ms(w.Held.Sub(w.T0))}
	case w.Why != "" && !w.Ended:
		return []string{value + " " + w.Why, value}
	case w.Label == "" || w.Name == "av_delay":
		return []string{value}
	}
	return []string{w.Label + " " + value, value}
}

// caption writes the text of a bar: inside it; over a timer it may stand out at both
// ends where its neighbours leave room; that of a window of unusual length may follow
// its bar.
func (v *watch) caption(w *ladder.Window, texts []string) {
	x0, x1, _ := v.visible(w.T0, max(w.T1, w.Held))
	row, h := v.rows[w.Row], WindowText.height(v.o.FontMM)
	for _, text := range texts {
		m := Mark{Shape: Text, Class: WindowText, X: (x0 + x1) / 2, Y: (row.Y0+row.Y1)/2 + 0.34*h, Text: text, Anchor: Middle, Event: w.Event}
		width := WindowText.Width(text, v.o.FontMM)
		if w.Hearing == ladder.Timer {
			m.Y = row.Y1 - 1.6
			least := width + 1.2
			if w.T0 >= v.o.From && max(w.T1, w.Held) <= v.o.To {
				least = 0.4 * width
			}
			if x1-x0 >= least && v.write(m, v.Axis.X0, v.right+pad) {
				return
			}
			continue
		}
		for _, part := range [...]float64{0.5, 0.6, 0.7, 0.8} {
			m.X = x0 + part*(x1-x0)
			if v.write(m, x0+0.6, x1-0.6) {
				return
			}
		}
		if m.X, m.Anchor = x1+0.6, Start; w.Why != "" && w.T1 <= v.o.To && v.empty(w.Row, x1, x1+width+1.2) && v.write(m, x1, v.right+pad) {
			return
		}
	}
}

// write puts a text down if it lies between two places and is free.
func (v *watch) write(m Mark, from, to float64) bool {
	b := v.TextBox(&m)
	if b.X0 < from || b.X1 > to || !v.room.free(b) {
		return false
	}
	v.room.box(b)
	v.over = append(v.over, m)
	return true
}

// empty tells whether no bar of a row lies between two places.
func (v *watch) empty(row int, from, to float64) bool {
	for _, w := range v.drawn {
		if w.Row == row && v.Axis.X(w.T0) < to && v.Axis.X(w.T1) > from {
			return false
		}
	}
	return true
}
