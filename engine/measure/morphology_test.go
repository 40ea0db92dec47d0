package measure

import (
	"fmt"
	"slices"
	"testing"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"
)

// knot is a corner of a hand-drawn trace: time in ms from QRS onset, millivolts.
type knot struct{ t, mv float64 }

// drawn makes a complex of the given width from corners; leads not given are
// built from I and aVF where they are limb leads and flat otherwise. After the
// QRS each lead has an ST of the opposite sign.
func drawn(width int, traces map[lead.Name][]knot) *lead.Complex {
	c := &lead.Complex{On: 20, Off: 20 + width, End: 20 + width + 200}
	n := c.End + 20
	for l := range lead.Name(lead.Count) {
		c.MV[l], c.Depol[l] = make([]float32, n), make([]float32, n)
		k := traces[l]
		for i := 1; i < len(k); i++ {
			for t := int(k[i-1].t); t < int(k[i].t); t++ {
				f := (float64(t) - k[i-1].t) / (k[i].t - k[i-1].t)
				c.Depol[l][c.On+t] = float32(k[i-1].mv + f*(k[i].mv-k[i-1].mv))
			}
		}
		copy(c.MV[l], c.Depol[l])
		st := -0.1
		if areaOf(c.Depol[l]) < 0 {
			st = 0.1
		}
		for t := c.Off + 1; t < c.End; t++ {
			c.MV[l][t] = float32(st)
		}
	}
	return c
}

// rightBlock: rsR' in V1, broad S in I and V6.
func rightBlock(width int) *lead.Complex {
	w := float64(width)
	return drawn(width, map[lead.Name][]knot{
		lead.I:   {{0, 0}, {20, .8}, {w - 55, 0}, {w - 25, -.4}, {w, 0}},
		lead.AVF: {{0, 0}, {30, .6}, {60, 0}, {w, 0}},
		lead.AVL: {{0, 0}, {20, .6}, {w - 55, 0}, {w - 25, -.3}, {w, 0}},
		lead.V1:  {{0, 0}, {12, .2}, {22, 0}, {35, -.5}, {48, 0}, {75, .9}, {w, 0}},
		lead.V5:  {{0, 0}, {35, 1}, {w - 55, 0}, {w - 25, -.4}, {w, 0}},
		lead.V6:  {{0, 0}, {35, 1}, {w - 55, 0}, {w - 25, -.4}, {w, 0}},
	})
}

// leftBlock: notched broad R in I, aVL, V5, V6, its second top at peak ms.
func leftBlock(width int, peak float64) *lead.Complex {
	w := float64(width)
	m := []knot{{0, 0}, {40, .7}, {peak - 10, .6}, {peak, 1}, {w, 0}}
	return drawn(width, map[lead.Name][]knot{
		lead.I: m, lead.AVL: m, lead.V5: m, lead.V6: m,
		lead.AVF: {{0, 0}, {40, -.1}, {w, 0}},
		lead.V1:  {{0, 0}, {60, -1.5}, {w, 0}},
	})
}

// limb draws a QRS of a given frontal axis with given figures in aVL and the
// inferior leads: up is aVL's r peak time.
func leftAnterior(width int, axisY float64, peak float64) *lead.Complex {
	w := float64(width)
	return drawn(width, map[lead.Name][]knot{
		lead.I:   {{0, 0}, {50, .6}, {w, 0}},
		lead.AVL: {{0, 0}, {10, -.15}, {20, 0}, {peak, 1}, {w, 0}},
		lead.AVF: {{0, 0}, {50, axisY}, {w, 0}},
		lead.II:  {{0, 0}, {15, .1}, {20, 0}, {60, -.5}, {w, 0}},
		lead.III: {{0, 0}, {15, .1}, {20, 0}, {60, -.8}, {w, 0}},
	})
}

func leftPosterior(width int, i float64) *lead.Complex {
	w := float64(width)
	qr := []knot{{0, 0}, {10, -.15}, {20, 0}, {50, 1}, {w, 0}}
	return drawn(width, map[lead.Name][]knot{
		lead.I:   {{0, 0}, {15, .1}, {20, 0}, {60, i}, {w, 0}},
		lead.AVL: {{0, 0}, {15, .1}, {20, 0}, {60, -.5}, {w, 0}},
		lead.AVF: qr, lead.III: qr,
	})
}

// Limits of AHA/ACCF/HRS 2009 part III: 109 normal, 110-119 incomplete, from 120
// complete; LBBB R-peak above 60 ms in V5/V6, RBBB above 50 ms in V1; LAFB axis
// -45 to -90, LPFB +90 to +180, both below 120 ms. Exact.
func TestMorphologyLimits(t *testing.T) {
	for _, c := range []struct {
		name string
		c    *lead.Complex
		want []string
	}{
		{"right 109", rightBlock(109), []string{}},
		{"right 110", rightBlock(110), []string{IncompleteRBBB}},
		{"right 119", rightBlock(119), []string{IncompleteRBBB}},
		{"right 120", rightBlock(120), []string{RBBB}},
		{"left 109", leftBlock(109, 75), []string{}},
		{"left 110", leftBlock(110, 75), []string{IncompleteLBBB}},
		{"left 119", leftBlock(119, 75), []string{IncompleteLBBB}},
		{"left 120", leftBlock(120, 75), []string{LBBB}},
		{"left 140, peak at 61", leftBlock(140, 61), []string{LBBB}},
		{"left 140, peak at 60", leftBlock(140, 60), []string{Nonspecific}},
		{"anterior -45", leftAnterior(100, -.6*.8660254, 50), []string{LAFB}},
		{"anterior about -44", leftAnterior(100, -.58*.8660254, 50), []string{}},
		{"anterior early peak", leftAnterior(100, -.9, 44), []string{}},
		{"anterior 119", leftAnterior(119, -.9, 50), []string{LAFB}},
		{"anterior 120", leftAnterior(120, -.9, 50), []string{Nonspecific}},
		{"posterior", leftPosterior(100, -.6), []string{LPFB}},
		{"posterior 120", leftPosterior(120, -.6), []string{Nonspecific}},
		{"110 without a pattern", leftPosterior(110, .6), []string{}},
		{"111 without a pattern", leftPosterior(111, .6), []string{Nonspecific}},
	} {
		m := Judge(c.c)
		if !slices.Equal(m.Patterns, c.want) {
			t.Errorf("%s: got %v, want %v", c.name, m.Patterns, c.want)
			for _, k := range m.Criteria {
				if k.Required && !k.Holds && slices.Contains(c.want, k.Pattern) {
					t.Logf("  %s asks %s: %s", k.Pattern, k.Asks, k.Found)
				}
			}
		}
	}
}

// The RBBB R-peak limit in V1 decides where V1 is one notched dominant R.
func TestPureR(t *testing.T) {
	pure := func(peak float64) *lead.Complex {
		c := rightBlock(130)
		d := drawn(130, map[lead.Name][]knot{lead.V1: {{0, 0}, {30, .5}, {40, .45}, {peak, .9}, {130, 0}}})
		c.Depol[lead.V1], c.MV[lead.V1] = d.Depol[lead.V1], d.MV[lead.V1]
		return c
	}
	for _, c := range []struct {
		name string
		peak float64
		want string
	}{{"51 ms", 51, RBBB}, {"50 ms", 50, Nonspecific}} {
		m := Judge(pure(c.peak))
		if got := m.Patterns; !slices.Equal(got, []string{c.want}) {
			t.Errorf("%s: got %v, want %s", c.name, got, c.want)
		}
	}
}

func TestLetters(t *testing.T) {
	m := Judge(rightBlock(130))
	if got := m.Letters["V1"]; got != "rSR'" {
		t.Errorf("V1: got %s, want rSR'", got)
	}
	if got := m.Letters["V2"]; got != "" {
		t.Errorf("flat V2: got %s, want nothing", got)
	}
	m = Judge(leftBlock(130, 75))
	if got := m.Letters["V1"]; got != "QS" {
		t.Errorf("V1: got %s, want QS", got)
	}
}

// record puts the same complex under every QRS of a log.
func record(l *event.Log, shape func(nth int) *lead.Complex, qt float64) *lead.Record {
	rec := &lead.Record{}
	n := 0
	s := read(l)
	for j := range s.v {
		c := shape(n)
		n++
		on := s.v[j].t
		rec.Waves = append(rec.Waves, lead.Wave{
			Kind: lead.QRS, Sources: s.v[j].roots, T: on, Onset: on, Complex: c,
			Offset: on.Add(tick.Dur(c.Off-c.On) * lead.Step), End: on.Add(tick.MS(qt)),
		})
	}
	return rec
}

func TestShapesOnAStrip(t *testing.T) {
	right, left := rightBlock(130), leftBlock(140, 75)
	narrow := leftPosterior(90, .6)
	strip := func() *event.Log { return conducts(800, 160, 160, 160, 160, 160, 160).log(t) }
	for _, c := range []struct {
		name  string
		shape func(int) *lead.Complex
		qt    float64
		want  []string
	}{
		{"right", func(int) *lead.Complex { return right }, 400, []string{"sinus_rhythm", RBBB}},
		{"left", func(int) *lead.Complex { return left }, 400, []string{"sinus_rhythm", LBBB}},
		{"narrow", func(int) *lead.Complex { return narrow }, 380, []string{"sinus_rhythm"}},
		{"alternating", func(n int) *lead.Complex { return []*lead.Complex{right, left}[n%2] }, 400, []string{"sinus_rhythm", RBBB, LBBB, "alternating_bundle_branch_block"}},
		// 430/0.8^(1/3) = 463.2
		{"long QT", func(int) *lead.Complex { return narrow }, 430, []string{"sinus_rhythm", "prolonged_qt"}},
		// 426/0.8^(1/3) = 458.9
		{"QT below the limit", func(int) *lead.Complex { return narrow }, 426, []string{"sinus_rhythm"}},
	} {
		l := strip()
		r := Of(l, record(l, c.shape, c.qt))
		if got := slugs(r); !slices.Equal(got, c.want) {
			t.Errorf("%s: got %v, want %v", c.name, got, c.want)
		}
		if fmt.Sprint(*r.Summary.QT) != fmt.Sprint(c.qt) {
			t.Errorf("%s: QT got %v, want %v", c.name, *r.Summary.QT, c.qt)
		}
	}
}

// A short cycle that finds the right bundle refractory is aberrant, not bundle branch block.
func TestAberrant(t *testing.T) {
	h := newHeart(6000)
	for i := range 3 {
		h.conduct(h.p(500+800*float64(i)), 160)
	}
	his := h.toHis(h.atrialBeat(2500), 200)
	h.stop(his, "his_right", event.PathRefractory, 0)
	v := h.along(h.along(his, "his_left", 25), "left_bundle-lv_septum", 22)
	h.along(v, "rv_apex-lv_septum", 60)
	for i := range 3 {
		h.conduct(h.p(3400+800*float64(i)), 160)
	}
	l := h.log(t)
	narrow, right := leftPosterior(90, .6), rightBlock(130)
	want := []string{"sinus_rhythm", "premature_atrial", "aberrant_conduction"}
	for name, rec := range map[string]*lead.Record{
		"without leads": nil,
		"with leads": record(l, func(n int) *lead.Complex {
			if n == 3 {
				return right
			}
			return narrow
		}, 380),
	} {
		if got := slugs(Of(l, rec)); !slices.Equal(got, want) {
			t.Errorf("%s: got %v, want %v", name, got, want)
		}
	}
}

// A lead I of 1 and an aVF of 0 is 0 degrees; a vector at 60 degrees has I 0.5
// and aVF sqrt(3)/2 sin 60 = 0.75 (Einthoven's triangle).
func TestAxes(t *testing.T) {
	for _, c := range []struct {
		name         string
		i, avf, want float64
	}{{"0", 1, 0, 0}, {"60", .5, .75, 60}, {"-90", 0, -1, -90}, {"180", -1, 0, 180}, {"-45", .7071068, -.6123724, -45}} {
		x := drawn(100, map[lead.Name][]knot{lead.I: {{0, 0}, {50, c.i}, {100, 0}}, lead.AVF: {{0, 0}, {50, c.avf}, {100, 0}}})
		area, net := axes(x)
		if area == nil || net == nil || *area != c.want || *net != c.want {
			t.Errorf("%s: got %v %v, want %v", c.name, area, net, c.want)
		}
	}
	if a, n := axes(drawn(100, nil)); a != nil || n != nil {
		t.Errorf("flat: got an axis")
	}
	if got := *middleAngle([]float64{170, -170, 175}); got != 175 {
		t.Errorf("median across 180: got %v, want 175", got)
	}
}
