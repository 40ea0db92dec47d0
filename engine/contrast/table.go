package contrast

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"escapement/engine/measure"
)

// Row is a line of the table of differences, ready to be shown or printed. Numbers of
// both sides always stand in it; findings, warnings and settings only where they
// differ.
type Row struct {
	Part   string `json:"part"` // in this order: Findings, Warnings, Rates, Paced, Intervals, Counts, Beats, Settings
	Name   string `json:"name"`
	Before string `json:"before"` // "none" where the side has no such number, "" for what is not there
	After  string `json:"after"`
	By     string `json:"by"` // "+20 ms", "gone", "new"; empty where nothing differs
	Sign   Sign   `json:"sign"`
	Place  string `json:"place,omitempty"` // of a setting: its path in the plan
}

func (c *Contrast) table(before, after Side) []Row {
	b, a := gauge(before.Report, before), gauge(after.Report, after)
	// What the strips are consistent with comes first: it is what is argued about.
	out := append([]Row{}, findings(before.Report, after.Report)...)
	out = append(out, lists("Warnings", before.Warnings, after.Warnings)...)
	for i := range b {
		if b[i].value == nil && a[i].value == nil {
			continue
		}
		out = append(out, compare(&b[i], a[i].value))
	}
	out = append(out, c.moved()...)
	for _, x := range c.Change {
		r := Row{Part: "Settings", Name: x.Label, Before: x.Before, After: x.After, By: "changed", Sign: Altered, Place: x.Path}
		switch {
		case x.Before == "":
			r.By, r.Sign = "new", New
		case x.After == "":
			r.By, r.Sign = "gone", Gone
		}
		out = append(out, r)
	}
	return out
}

// number is a measured value of one side.
type number struct {
	part, name, unit string
	value            *float64
}

// gauge measures one side: the same list, in the same order, for both. Rates, VA and
// the device's intervals are medians.
func gauge(r *measure.Report, s Side) []number {
	s0 := &r.Summary
	pr, rr := spread(r, "P", func(b *measure.Beat) *float64 {
		if b.Retrograde { // no PR of a P that came up
			return nil
		}
		return b.PR
	}), spread(r, "QRS", func(b *measure.Beat) *float64 { return b.RR })
	longest := without(r, s.Log.Span.MS())
	out := []number{
		{"Rates", "P rate", "/min", s0.PRate},
		{"Rates", "QRS rate", "/min", s0.VRate},
	}
	d := r.Device
	if d == nil {
		d = &measure.Device{}
	}
	out = append(out,
		number{"Paced", "atrium paced", "%", d.AtrialPaced},
		number{"Paced", "ventricle paced", "%", d.VentricularPaced},
		number{"Paced", "AV synchronous", "%", d.Synchronous},
		number{"Intervals", "PR, shortest", "ms", pr.least},
		number{"Intervals", "PR, mean", "ms", pr.mean},
		number{"Intervals", "PR, longest", "ms", pr.most})
	for _, name := range [...]string{"AS-VP", "AP-VP", "AP-VS", "VP-AS", "VP-AP", "VS-AP"} {
		n := number{"Intervals", name, "ms", nil}
		for i := range d.Intervals {
			if d.Intervals[i].Name == name {
				n.value = d.Intervals[i].Median
			}
		}
		out = append(out, n)
	}
	return append(out,
		number{"Intervals", "VA", "ms", s0.VA},
		number{"Intervals", "RR, shortest", "ms", rr.least},
		number{"Intervals", "RR, mean", "ms", rr.mean},
		number{"Intervals", "RR, longest", "ms", rr.most},
		number{"Intervals", "longest without QRS", "ms", &longest},
		number{"Counts", "P waves", "", whole(s0.PCount)},
		number{"Counts", "QRS complexes", "", whole(s0.QRSCount)},
		number{"Counts", "P waves conducted", "", whole(s0.Conducted)})
}

func whole(n int) *float64 {
	v := float64(n)
	return &v
}

// limits of a list of intervals; nil without any.
type limits struct{ least, mean, most *float64 }

func spread(r *measure.Report, kind string, of func(*measure.Beat) *float64) limits {
	var all []float64
	for i := range r.Beats {
		if b := &r.Beats[i]; b.Kind == kind && of(b) != nil {
			all = append(all, *of(b))
		}
	}
	if len(all) == 0 {
		return limits{}
	}
	sum := 0.0
	for _, v := range all {
		sum += v
	}
	least, most, mean := slices.Min(all), slices.Max(all), sum/float64(len(all))
	return limits{&least, &mean, &most}
}

// without is the longest time without a QRS, between two or to an end of the strip,
// in milliseconds.
func without(r *measure.Report, span float64) float64 {
	last, longest := 0.0, 0.0
	for i := range r.Beats {
		if b := &r.Beats[i]; b.Kind == "QRS" {
			longest, last = max(longest, b.T.MS()-last), b.T.MS()
		}
	}
	return max(longest, span-last)
}

// compare makes the row of a number. What is the same as shown does not differ.
func compare(b *number, after *float64) Row {
	r := Row{Part: b.part, Name: b.name, Before: b.text(b.value), After: b.text(after)}
	switch {
	case b.value == nil:
		r.By, r.Sign = "new", New
	case after == nil:
		r.By, r.Sign = "gone", Gone
	default:
		by := math.Round(*after) - math.Round(*b.value)
		switch {
		case by > 0:
			r.By, r.Sign = "+"+b.text(&by), Later
		case by < 0:
			by = -by
			r.By, r.Sign = "−"+b.text(&by), Earlier
		}
	}
	return r
}

func (n *number) text(v *float64) string {
	if v == nil {
		return "none"
	}
	t := strconv.FormatFloat(math.Round(*v), 'f', -1, 64)
	if n.unit == "" || n.unit == "/min" || n.unit == "%" {
		return t + n.unit
	}
	return t + " " + n.unit
}

// moved counts the beats that have no partner, and those that moved by a millisecond
// or more.
func (c *Contrast) moved() []Row {
	var out []Row
	for _, k := range [...]struct {
		channel byte
		name    string
	}{{'A', "P waves"}, {'V', "QRS complexes"}} {
		var gone, fresh, early, late int
		var most float64
		for i := range c.Beats {
			b := &c.Beats[i]
			if b.Channel != k.channel {
				continue
			}
			switch by := b.By().MS(); {
			case b.Sign == Gone:
				gone++
			case b.Sign == New:
				fresh++
			case by <= -0.5:
				early, most = early+1, max(most, -by)
			case by >= 0.5:
				late, most = late+1, max(most, by)
			}
		}
		if gone+fresh > 0 {
			out = append(out, Row{Part: "Beats", Name: k.name + " without a partner", Before: strconv.Itoa(gone), After: strconv.Itoa(fresh),
				By: fmt.Sprintf("%d gone, %d new", gone, fresh), Sign: Altered})
		}
		if early+late > 0 {
			out = append(out, Row{Part: "Beats", Name: k.name + " moved", After: fmt.Sprintf("%d earlier, %d later", early, late),
				By: fmt.Sprintf("by up to %.0f ms", most), Sign: Altered})
		}
	}
	return out
}

// lists tells what only one of two lists has.
func lists(part string, before, after []string) []Row {
	var out []Row
	for _, t := range before {
		if !slices.Contains(after, t) {
			out = append(out, Row{Part: part, Name: t, Before: "yes", By: "gone", Sign: Gone})
		}
	}
	for _, t := range after {
		if !slices.Contains(before, t) {
			out = append(out, Row{Part: part, Name: t, After: "yes", By: "new", Sign: New})
		}
	}
	return out
}

// findings are compared by what they find. Where both sides have one, what the
// statement says of it may differ in its numbers.
func findings(before, after *measure.Report) []Row {
	var out []Row
	for i := range before.Findings {
		slug := before.Findings[i].Slug
		was, is := says(before, slug), says(after, slug)
		switch {
		case !has(after, slug):
			if i > 0 && has(&measure.Report{Findings: before.Findings[:i]}, slug) {
				continue // told already
			}
			out = append(out, Row{Part: "Findings", Name: was, Before: "yes", By: "gone", Sign: Gone})
		case was != is && !listed(out, slug):
			out = append(out, Row{Part: "Findings", Name: words(slug), Before: was, After: is, By: "changed", Sign: Altered})
		}
	}
	for i := range after.Findings {
		if slug := after.Findings[i].Slug; !has(before, slug) && !has(&measure.Report{Findings: after.Findings[:i]}, slug) {
			out = append(out, Row{Part: "Findings", Name: says(after, slug), After: "yes", By: "new", Sign: New})
		}
	}
	return out
}

func has(r *measure.Report, slug string) bool {
	return slices.ContainsFunc(r.Findings, func(f measure.Finding) bool { return f.Slug == slug })
}

func listed(rows []Row, slug string) bool {
	return slices.ContainsFunc(rows, func(r Row) bool { return r.Name == words(slug) })
}

// says is the statement's clauses about a finding, or the name of one that has none.
func says(r *measure.Report, slug string) string {
	var parts []string
	for _, c := range r.Clauses {
		if c.Slug == slug && !slices.Contains(parts, c.Text) {
			parts = append(parts, c.Text)
		}
	}
	if len(parts) == 0 {
		return words(slug)
	}
	return strings.Join(parts, "; ")
}

func words(slug string) string { return strings.ReplaceAll(slug, "_", " ") }
