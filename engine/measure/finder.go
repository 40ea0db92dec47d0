package measure

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// finder collects findings. Each method looks for one family.
type finder struct {
	*strip
	surf   *surface
	report *Report
	found  []Finding
}

// Order of the families in the list and in the sentence.
const (
	orderDevice = 10 * (iota + 1)
	orderTachycardia
	orderAtria
	orderExit
	orderBlock
	orderVentricles
	orderDissociation
	orderPremature
	orderShape
	orderConduction
	orderMode
	orderFault
	orderQT
)

func (f *finder) all() {
	f.sinusRhythm()
	f.otherAtrial()
	f.sinoatrial()
	f.avBlock()
	f.escapes()
	f.dissociation()
	f.prematureAtrial()
	f.prematureVentricular()
	f.shapes()
	f.aberrant()
	f.retrograde()
	f.ventricularOverdrive()
	f.concealed()
	f.fusion()
	f.qt()
	f.devices()
	f.once()
	slices.SortStableFunc(f.found, func(a, b Finding) int { return a.order - b.order })
}

// add sorts the evidence and notes which part of the strip it covers.
func (f *finder) add(order int, x Finding) {
	x.Evidence = slices.Clone(x.Evidence)
	slices.Sort(x.Evidence)
	x.Evidence = slices.Compact(x.Evidence)
	if n := len(x.Evidence); n > 0 && x.Evidence[0] == 0 {
		x.Evidence = x.Evidence[1:]
	}
	if x.Evidence = nonNil(x.Evidence); len(x.Evidence) > 0 {
		x.FromUS = f.log.At(x.Evidence[0]).T
		x.UntilUS = f.log.At(x.Evidence[len(x.Evidence)-1]).T
	}
	if x.Count == 0 {
		x.Count = 1
	}
	x.order = order
	f.found = append(f.found, x)
}

func (f *finder) has(slug string) bool {
	return slices.ContainsFunc(f.found, func(x Finding) bool { return x.Slug == slug })
}

// statement joins the clauses into one sentence.
func statement(found []Finding) (string, []Clause) {
	clauses := []Clause{}
	var words []string
	for _, x := range found {
		if x.clause == "" {
			continue
		}
		text := x.clause
		if p := place(x.Level); p != "" && x.order == orderBlock {
			text += ", " + p
		}
		clauses = append(clauses, Clause{text, x.Evidence, x.Slug})
		words = append(words, text)
	}
	if len(words) == 0 {
		words = []string{"no rhythm can be named from this strip"}
	}
	s := strings.Join(words, ", ") + "."
	return strings.ToUpper(s[:1]) + s[1:], clauses
}

// once takes out of the sentence what another clause has said: the beats of a train
// that was judged, the block that makes flutter's ratio, and what fibrillation brings
// with it. The findings stay.
func (f *finder) once() {
	quiet := func(x *Finding, slugs ...string) {
		if slices.Contains(slugs, x.Slug) {
			x.clause = ""
		}
	}
	for k := range f.found {
		x := &f.found[k]
		for _, o := range f.report.Overdrive {
			if x.FromUS >= o.FromUS && x.UntilUS <= o.LastUS.Add(tick.Second/2) {
				quiet(x, "ventricular_stimulation", "retrograde_conduction", "fusion_beat")
			}
		}
		if f.has("atrial_flutter") {
			quiet(x, "functional_av_block")
		}
		if f.has("atrial_fibrillation") {
			quiet(x, "av_reentrant_beat", "concealed_conduction")
		}
		if f.has("pre_excited_fibrillation") {
			quiet(x, "pre_excitation")
		}
	}
}

// whole writes milliseconds without decimals.
func whole(d tick.Dur) string { return strconv.FormatInt((int64(d)+500)/1000, 10) }

// wholes lists intervals; of more than nine the first four and last three.
func wholes(ds []tick.Dur) string {
	var w []string
	for k, d := range ds {
		switch {
		case len(ds) <= 9 || k < 4 || k >= len(ds)-3:
			w = append(w, whole(d))
		case k == 4:
			w = append(w, "...")
		}
	}
	return strings.Join(w, ", ")
}

func perMinute(d tick.Dur) string { return fmt.Sprintf("%.0f/min", d.BPM()) }

// times counts in words: "once", "3 times".
func times(n int) string {
	if n == 1 {
		return "once"
	}
	return strconv.Itoa(n) + " times"
}

func plural(n int, one, many string) string {
	return strconv.Itoa(n) + " " + oneOr(n, one, many)
}

// oneOr is the word for one thing or for many.
func oneOr(n int, one, many string) string {
	if n == 1 {
		return one
	}
	return many
}

// blocked is the evidence for blocked P waves: the P and the blocks that stopped it.
func (f *finder) blocked(ps []int) []event.ID {
	var ids []event.ID
	for _, i := range ps {
		ids = append(ids, f.p[i].id)
		ids = append(ids, f.deepest(i)...)
	}
	return ids
}

// conducted is the evidence for conducted P waves: the P and its QRS.
func (f *finder) conducted(ps []int) []event.ID {
	var ids []event.ID
	for _, i := range ps {
		ids = append(ids, f.p[i].id, f.v[f.p[i].to].id)
	}
	return ids
}

func msList(ds []tick.Dur) []float64 {
	var out []float64
	for _, d := range ds {
		out = append(out, d.MS())
	}
	return out
}
