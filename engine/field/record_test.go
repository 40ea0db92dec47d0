package field

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/lead"
	"escapement/engine/tick"

	"pgregory.net/rapid"
)

// network is the sites and paths that the field reads from a log.
const network = `
site sinus sinus
site right_atrium atrium
site left_atrium atrium
site atrial_septum atrium
site av_junction av_node
site his his
site right_bundle purkinje
site left_bundle purkinje
site left_anterior purkinje
site left_septal purkinje
site left_posterior purkinje
site rv_septum ventricle
site rv_apex ventricle
site lv_lateral ventricle
path sinoatrial sinus sinus right_atrium
path internodal atrium right_atrium atrial_septum
path interatrial atrium right_atrium left_atrium
path av_fast av_node atrial_septum av_junction
path his_right purkinje his right_bundle
path left_bundle-left_anterior purkinje left_bundle left_anterior
path left_bundle-left_septal purkinje left_bundle left_septal
path left_bundle-left_posterior purkinje left_bundle left_posterior
path right_bundle-rv_septum purkinje right_bundle rv_septum
path rv_septum-rv_apex ventricle rv_septum rv_apex
path bypass accessory left_atrium lv_lateral
`

// strip writes a log by hand: impulse adds an activation by a path, with the
// activations of its entrance made up at the same time.
type strip struct {
	b  strings.Builder
	id int
}

func newStrip(span tick.Time) *strip {
	s := &strip{}
	fmt.Fprintf(&s.b, "log span=%d%s", span, network)
	return s
}

func (s *strip) add(at tick.Time, kind, rule, rest string) {
	s.id++
	fmt.Fprintf(&s.b, "%d %d %s %s from=%d %s\n", s.id, at, kind, rule, max(s.id-1, 0), rest)
}

func (s *strip) conduct(at tick.Time, path, dir, site string) {
	s.add(at, "activate", "conducted", fmt.Sprintf("site=%s path=%s dir=%s until=%d", site, path, dir, at+1))
}

func (s *strip) capture(at tick.Time, site string) {
	s.add(at, "activate", "captured", fmt.Sprintf("site=%s until=%d", site, at+1))
}

// sinus adds a P wave and, 150 ms later, the fascicles.
func (s *strip) sinus(at tick.Time) {
	s.conduct(at, "sinoatrial", "down", "right_atrium")
	s.conduct(at+41000, "internodal", "down", "atrial_septum")
	s.conduct(at+90000, "interatrial", "down", "left_atrium")
	s.fascicles(at + 120000)
}

// fascicles fires them as after a depolarisation of the His bundle at the time.
func (s *strip) fascicles(his tick.Time) {
	for _, e := range parts()[0].Entries {
		if e.After > 0 {
			path := "left_bundle-" + e.Site
			if e.Site == "right_bundle" {
				path = "his_right"
			}
			s.conduct(his+tick.Time(e.After), path, "down", e.Site)
		}
	}
}

func (s *strip) log(t interface{ Fatal(...any) }) *event.Log {
	l, err := event.Parse(strings.NewReader(s.b.String()))
	if err != nil {
		t.Fatal(err)
	}
	slices.SortStableFunc(l.Events, func(a, b event.Event) int { return int(a.T - b.T) })
	for i := range l.Events {
		l.Events[i].ID = event.ID(i + 1)
	}
	return l
}

func sites(l *event.Log, w *lead.Wave) string {
	var out []string
	for _, id := range w.Sources {
		out = append(out, l.Sites[l.At(id).Site].Name)
	}
	slices.Sort(out)
	return strings.Join(out, " ")
}

func TestSourcesOfEachWave(t *testing.T) {
	for _, c := range []struct {
		name string
		make func(s *strip)
		want []string
	}{
		{"sinus beat", func(s *strip) { s.sinus(500000) }, []string{"right_atrium", "left_anterior left_posterior left_septal right_bundle"}},
		{"impulses through muscle are the field's own", func(s *strip) {
			s.capture(500000, "rv_apex")
			s.conduct(550000, "rv_septum-rv_apex", "up", "rv_septum")
		}, []string{"rv_apex"}},
		{"a fascicle from muscle joins, however late", func(s *strip) {
			s.capture(500000, "rv_apex")
			s.conduct(570000, "right_bundle-rv_septum", "up", "right_bundle")
			s.conduct(750000, "right_bundle-rv_septum", "up", "right_bundle")
		}, []string{"right_bundle rv_apex"}},
		{"accessory pathway", func(s *strip) { s.conduct(500000, "bypass", "down", "lv_lateral") }, []string{"lv_lateral"}},
		{"retrograde P", func(s *strip) { s.conduct(500000, "av_fast", "up", "atrial_septum") }, []string{"atrial_septum"}},
		{"the same site again is another wave", func(s *strip) {
			s.capture(500000, "rv_apex")
			s.capture(650000, "rv_apex")
		}, []string{"rv_apex", "rv_apex"}},
		{"two sites together are one wave, far apart two", func(s *strip) {
			s.capture(500000, "rv_apex")
			s.capture(530000, "lv_lateral")
			s.capture(900000, "rv_apex")
			s.capture(1100001, "lv_lateral")
		}, []string{"lv_lateral rv_apex", "rv_apex", "lv_lateral"}},
	} {
		s := newStrip(2000000)
		c.make(s)
		l := s.log(t)
		var got []string
		for _, w := range New().Record(l).Waves {
			got = append(got, sites(l, &w))
		}
		if !slices.Equal(got, c.want) {
			t.Errorf("%s: waves start from %q, want %q", c.name, got, c.want)
		}
	}
}

func TestLeadsObeyEinthovenAndGoldberger(t *testing.T) {
	s := newStrip(1500000)
	s.sinus(500000)
	r := Record(s.log(t))
	for i := range r.MV[0] {
		one, two := float64(r.MV[lead.I][i]), float64(r.MV[lead.II][i])
		for _, c := range []struct {
			l    lead.Name
			want float64
		}{{lead.III, two - one}, {lead.AVR, -(one + two) / 2}, {lead.AVL, one - two/2}, {lead.AVF, two - one/2}} {
			if got := float64(r.MV[c.l][i]); math.Abs(got-c.want) > 1e-6 {
				t.Fatalf("sample %d: %s is %v, want %v", i, c.l, got, c.want)
			}
		}
	}
}

func TestStripWithoutSourcesIsFlat(t *testing.T) {
	r := Record(newStrip(700500).log(t))
	if len(r.Waves) != 0 || len(r.MV[0]) != 700 {
		t.Fatalf("%d waves, %d samples; want none and 700", len(r.Waves), len(r.MV[0]))
	}
	for l := range r.MV {
		for _, v := range r.MV[l] {
			if v != 0 {
				t.Fatalf("%v mV without a source", v)
			}
		}
	}
}

// Moving everything by whole milliseconds moves the record by as many samples,
// to the bit; moving by less moves the marks by exactly that.
func TestTimeShiftMovesTheRecord(t *testing.T) {
	f := New()
	rapid.Check(t, func(rt *rapid.T) {
		start := tick.Time(rapid.Int64Range(300000, 320000).Draw(rt, "start"))
		shift := tick.Time(rapid.Int64Range(1, 400).Draw(rt, "ms")) * 1000
		cycle := tick.Time(rapid.Int64Range(400000, 900000).Draw(rt, "cycle"))
		make := func(at tick.Time) *lead.Record {
			s := newStrip(4000000)
			s.sinus(at)
			s.sinus(at + cycle)
			s.capture(at+2*cycle, "rv_apex")
			return f.Record(s.log(rt))
		}
		a, b := make(start), make(start+shift)
		for l := range a.MV {
			for i := 0; i+int(shift/1000) < len(a.MV[l]); i++ {
				if a.MV[l][i] != b.MV[l][i+int(shift/1000)] {
					rt.Fatalf("%s differs at sample %d", lead.Name(l), i)
				}
			}
		}
		part := make(start + 137)
		for i := range a.Waves {
			if got, want := part.Waves[i].Onset-a.Waves[i].Onset, tick.Time(137); got != want {
				rt.Fatalf("onset of wave %d moved by %d us, want %d", i, got, want)
			}
		}
	})
}

// A wave that starts between two samples is read off by linear interpolation: a
// quarter of a millisecond later, a sample is three quarters of the old one and
// a quarter of the one before it.
func TestSamplesBetweenMilliseconds(t *testing.T) {
	make := func(at tick.Time) []float32 {
		s := newStrip(1500000)
		s.fascicles(at)
		return Record(s.log(t)).MV[lead.V4]
	}
	whole, late := make(500000-tick.Time(earliest())), make(500250-tick.Time(earliest()))
	for i := 1; i < len(whole); i++ {
		if want := 0.75*float64(whole[i]) + 0.25*float64(whole[i-1]); math.Abs(float64(late[i])-want) > 1e-6 {
			t.Fatalf("sample %d is %v mV, want %v", i, late[i], want)
		}
	}
}

// earliest is when the first fascicle fires after the His bundle, microseconds.
func earliest() int32 {
	first := int32(math.MaxInt32)
	for _, e := range parts()[0].Entries {
		if e.After > 0 {
			first = min(first, e.After)
		}
	}
	return first
}

// What was computed before, in which order and how much of it was forgotten
// never shows.
func TestRememberedWavesChangeNothing(t *testing.T) {
	busy := New()
	rapid.Check(t, func(rt *rapid.T) {
		s := newStrip(6000000)
		at := tick.Time(300000)
		for range rapid.IntRange(1, 6).Draw(rt, "beats") {
			if rapid.Bool().Draw(rt, "paced") {
				two := rapid.Permutation([]string{"rv_apex", "lv_lateral"}).Draw(rt, "order")
				s.capture(at, two[0])
				s.capture(at+1000*tick.Time(rapid.Int64Range(0, 4).Draw(rt, "delay")), two[1])
			} else {
				s.sinus(at)
			}
			at += tick.Time(rapid.Int64Range(300000, 900000).Draw(rt, "cycle"))
		}
		l := s.log(rt)
		if got, want := busy.Record(l), New().Record(l); !equal(got, want) {
			rt.Fatal("a field that had worked before gave another record")
		}
	})
	if n := len(busy.ventricles.known); n > rememberMost {
		t.Errorf("%d waves are kept, more than %d", n, rememberMost)
	}
}

func equal(a, b *lead.Record) bool {
	for l := range a.MV {
		if !slices.Equal(a.MV[l], b.MV[l]) {
			return false
		}
	}
	return slices.EqualFunc(a.Waves, b.Waves, func(v, w lead.Wave) bool {
		return v.Onset == w.Onset && v.Offset == w.Offset && v.End == w.End && slices.Equal(v.Sources, w.Sources)
	})
}

func TestTransferRowsSumToZero(t *testing.T) {
	for _, p := range parts() {
		for l := range p.Weights {
			sum := 0
			for _, w := range p.Weights[l] {
				sum += int(w)
			}
			if sum != 0 || len(p.Weights[l]) != len(p.Tri) {
				t.Errorf("%s, lead %d: %d weights sum to %d, want %d and 0", p.Name, l, len(p.Weights[l]), sum, len(p.Tri))
			}
		}
	}
}
