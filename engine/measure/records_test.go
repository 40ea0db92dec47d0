package measure

import (
	"encoding/csv"
	"os"
	"path/filepath"
	"sort"
	"strconv"
	"testing"

	"escapement/engine/event"
)

// mark of a record: P at its peak or QRS near its R peak.
type annotation struct {
	ms         float64
	kind, code string
}

// annotated reads one record of the MIT-BIH Arrhythmia Database with its P-wave
// annotations (Moody and Mark 2001; Nemcova et al. 2018; PhysioNet, ODC-By), or
// skips the test where the data are absent.
func annotated(t *testing.T, name string) []annotation {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "..", "shared", "data", "pr-annotations", name+".csv"))
	if err != nil {
		t.Skip("annotated records are not here: ", err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []annotation
	for _, r := range rows[1:] {
		ms, err := strconv.ParseFloat(r[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		code := r[3]
		if r[2] == "RHYTHM" {
			code = r[4]
		}
		out = append(out, annotation{ms, r[2], code})
	}
	return out
}

// heartOf turns annotations into a log. A QRS marked V or E begins in the right
// ventricle, a P before a QRS marked A in the atrium; every other P in the sinus
// node. A P conducts to the next QRS from above 60 to 400 ms later; before a
// ventricular beat it is stopped in the node. A P with no QRS close after it, or
// near a remark on signal quality, is left out: nothing in the record says what
// became of it. A QRS from above without a labelled P begins in the junction if
// it is marked j or J, and is left out else, since not every P is labelled.
// Stretches of flutter, fibrillation and ventricular flutter have no P labels.
func heartOf(rows []annotation) *heart {
	const lead = 1000 // room before the first beat
	h := newHeart(lead + rows[len(rows)-1].ms + 700)
	var p, q []annotation
	unlabelled := false
	for _, r := range rows {
		switch r.kind {
		case "RHYTHM":
			unlabelled = r.code == "(AFIB" || r.code == "(AFL" || r.code == "(VFL"
		case "P":
			p = append(p, r)
		case "QRS":
			if unlabelled {
				r.code = "?"
			}
			q = append(q, r)
		}
	}
	led := make([]bool, len(q))
	for _, w := range p {
		i := sort.Search(len(q), func(k int) bool { return q[k].ms > w.ms })
		if i == len(q) || q[i].ms-w.ms < 60 || q[i].ms-w.ms > 400 || led[i] || q[i].code == "?" || q[i].code == "Q" {
			continue
		}
		led[i] = !below(q[i].code)
		at, pr := lead+w.ms, max(q[i].ms-w.ms, 90)
		switch q[i].code {
		case "V", "E":
			h.stop(h.p(at), "av_fast", event.Collision, 20)
		case "A", "a":
			h.conduct(h.along(h.fire(at, "right_atrium"), "internodal", 30), pr)
		default:
			h.conduct(h.p(at), pr)
		}
	}
	for i, r := range q {
		switch {
		case led[i]:
		case below(r.code):
			h.pvc(lead+r.ms, true)
		case r.code == "j" || r.code == "J":
			h.escapeJunction(lead + r.ms)
		}
	}
	return h
}

func below(code string) bool { return code == "V" || code == "E" }

// Checks that the annotations themselves support: their beat codes and rhythm
// codes. None of the eleven records is marked with second or third degree AV
// block, so none may be found.
func TestAnnotatedRecords(t *testing.T) {
	for _, c := range []struct {
		name string
		want map[string][2]int // slug: fewest and most
	}{
		// 33 atrial premature beats, 18 of them with a labelled P, and 1 ventricular
		{"100", map[string][2]int{"sinus_rhythm": {2000, 2400}, "premature_atrial": {18, 18}, "premature_ventricular": {1, 1}, "full_compensatory_pause": {1, 1}}},
		{"101", map[string][2]int{"sinus_rhythm": {1800, 1900}, "premature_ventricular": {0, 0}}},
		{"103", map[string][2]int{"sinus_rhythm": {2000, 2100}, "premature_ventricular": {0, 0}}},
		// 520 ventricular beats, many in bigeminy
		{"106", map[string][2]int{"premature_ventricular": {450, 520}}},
		{"117", map[string][2]int{"sinus_rhythm": {1500, 1540}, "premature_ventricular": {0, 0}}},
		// 444 ventricular beats, bigeminy and trigeminy: the RR intervals around the
		// lone ones add up to 1.94-2.17 of the RR before (5th to 95th percentile), so
		// nearly none is less than compensatory
		{"119", map[string][2]int{"premature_ventricular": {440, 444}, "full_compensatory_pause": {100, 444}, "less_than_full_compensatory_pause": {0, 25}, "interpolated_ventricular": {0, 0}}},
		{"122", map[string][2]int{"sinus_rhythm": {2400, 2500}, "premature_ventricular": {0, 0}}},
		// long PR, 105 ventricular escape beats (E) under the rhythm code IVR
		{"207", map[string][2]int{"first_degree_av_block": {1000, 1420}, "ventricular_escape": {1, 105}}},
		{"214", map[string][2]int{"premature_ventricular": {220, 256}}},
		// 212 junctional escape beats (j) under the rhythm code NOD
		{"222", map[string][2]int{"junctional_escape": {20, 213}}},
		// 473 ventricular beats: 292 alone or in pairs, 7 runs of three or more
		{"223", map[string][2]int{"premature_ventricular": {260, 299}, "ventricular_tachycardia": {50, 181}}},
	} {
		r := Of(heartOf(annotated(t, c.name)).log(t), nil)
		for _, f := range r.Findings {
			switch f.Slug {
			case "mobitz_1", "mobitz_2", "two_to_one_av_block", "advanced_av_block", "complete_av_block", "alternating_wenckebach":
				t.Errorf("%s: %s (%d), no such rhythm is marked", c.name, f.Slug, f.Count)
			}
		}
		for slug, n := range c.want {
			got := 0
			if f := r.finding(slug); f != nil {
				got = f.Count
			}
			if got < n[0] || got > n[1] {
				t.Errorf("%s: %s got %d, want %d to %d", c.name, slug, got, n[0], n[1])
			}
		}
	}
}
