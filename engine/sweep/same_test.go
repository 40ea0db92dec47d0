package sweep

import (
	"bytes"
	"context"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// random is a grid with everything that could depend on who runs a point and when:
// jitter and drops by several seeds, an extra stimulus, hearts that cannot be, and
// words.
func random(t testing.TB) *Grid {
	return grid(t, 6000, `"sinus":{"rate_bpm":80,"jitter_ms":80},"av_node":{"fast":{"ah_ms":80,"drop":"20%"}}`, `{"mode":"DDD","lower_rate_bpm":50}`, ``,
		`"x":{"field":"heart.av_node.fast.ah_ms","from":60,"to":300,"step":40},"y":{"premature":"rv_apex","after_ms":2000,"from":200,"to":900,"step":100},
		"seeds":5,"outcomes":["pattern","v_rate_bpm","loop_cycle_ms","fusion_percent","findings","warnings","vulnerable_stimuli"]`)
}

// The same bytes with one worker and with eight, forwards, backwards and shuffled, and
// joined from parts.
func TestTheBytesDoNotDependOnOrderWorkersOrParts(t *testing.T) {
	g := random(t)
	want := written(t, all(t, g, Settings{Workers: 1}))
	if !strings.Contains(want, `"refused":{"list":["heart`) {
		t.Error("no point of the grid is refused, so that is not tested")
	}
	forwards := g.Part(1, 1)
	backwards := slices.Clone(forwards)
	slices.Reverse(backwards)
	shuffled := slices.Clone(forwards)
	rand.New(rand.NewPCG(1, 2)).Shuffle(len(shuffled), func(i, j int) { shuffled[i], shuffled[j] = shuffled[j], shuffled[i] })
	for _, c := range []struct {
		name string
		s    Settings
	}{
		{"eight workers", Settings{Workers: 8}},
		{"backwards", Settings{Workers: 1, Points: backwards}},
		{"backwards, eight workers", Settings{Workers: 8, Points: backwards}},
		{"shuffled, three workers", Settings{Workers: 3, Points: shuffled}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := written(t, all(t, g, c.s)); got != want {
				t.Errorf("got  %s\nwant %s", got, want)
			}
		})
	}
	t.Run("joined from parts", func(t *testing.T) {
		joined := NewTable(g)
		for _, i := range []int{3, 1, 5, 2, 4} {
			part := all(t, g, Settings{Points: g.Part(i, 5), Workers: 1})
			if err := joined.Join([]byte(written(t, part))); err != nil {
				t.Fatal(err)
			}
		}
		if got := written(t, joined); got != want {
			t.Errorf("got  %s\nwant %s", got, want)
		}
		if left := joined.Missing(); len(left) > 0 {
			t.Errorf("points %v are missing", left)
		}
		if err := joined.Join([]byte(want)); err != nil {
			t.Errorf("the whole, joined to itself: %v", err)
		}
	})
}

// A run that is stopped can go on later from what is missing.
func TestAStoppedRunGoesOn(t *testing.T) {
	g := random(t)
	want := written(t, all(t, g, Settings{}))
	for _, workers := range []int{1, 4} {
		table := NewTable(g)
		ctx, stop := context.WithCancel(context.Background())
		st, err := g.Run(ctx, Settings{Workers: workers, Each: func(p int, c Cell) {
			table.Put(p, c)
			if table.Done() == 10 {
				stop()
			}
		}})
		if err == nil || st.Done < 10 || st.Done == st.Of || table.Done() != st.Done {
			t.Fatalf("%d of %d points, %d in the table (%v)", st.Done, st.Of, table.Done(), err)
		}
		if st, err = g.Run(context.Background(), Settings{Workers: workers, Points: table.Missing(), Budget: 7, Each: table.Put}); err != nil || st.Done != 7 {
			t.Fatalf("budget of 7: %d points (%v)", st.Done, err)
		}
		if _, err = g.Run(context.Background(), Settings{Points: table.Missing(), Each: table.Put}); err != nil {
			t.Fatal(err)
		}
		if got := written(t, table); got != want {
			t.Errorf("%d workers: stopped twice, the table differs", workers)
		}
	}
}

func TestWhatDoesNotBelongIsNotJoined(t *testing.T) {
	g := random(t)
	whole := written(t, all(t, g, Settings{}))
	other := grid(t, 3000, noAV, `null`, ``, `"x":{"field":"heart.sinus.rate_bpm","values":[60]}`)
	for _, c := range []struct{ name, data, want string }{
		{"no JSON", "x", "no table of a sweep"},
		{"another file", `{"format":"escapement-plan/1"}`, `format is "escapement-plan/1"; allowed: "escapement-sweep/1"`},
		{"another sweep", written(t, all(t, other, Settings{})), "a table of another plan or sweep"},
		{"a point too far", strings.Replace(whole, `"points":[0,`, `"points":[999,`, 1), "point 999; allowed: 0 to 55"},
		{"a list too short", strings.Replace(whole, `"points":[0,`, `"points":[0,0,`, 1), "do not have an entry"},
		{"another column", strings.Replace(whole, `"name":"pattern"`, `"name":"patern"`, 1), "columns that are not this sweep's"},
		{"other outcomes", strings.Replace(whole, `"refused":{"list":["heart`, `"refused":{"list":["art`, 1), "is there already, with other outcomes"},
	} {
		t.Run(c.name, func(t *testing.T) {
			table := NewTable(g)
			if err := table.Join([]byte(whole)); err != nil {
				t.Fatal(err)
			}
			if err := table.Join([]byte(c.data)); err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
}

func FuzzJoin(f *testing.F) {
	g := grid(f, 2000, noAV, `{}`, ``, `"x":{"field":"heart.sinus.rate_bpm","values":[60,90]},"seeds":2,"outcomes":["pattern","v_rate_bpm","warnings"]`)
	f.Add([]byte(written(f, all(f, g, Settings{}))))
	f.Add([]byte(`{"format":"escapement-sweep/1"}`))
	// Joining never panics, and what was joined can be written and joined again.
	f.Fuzz(func(t *testing.T, data []byte) {
		table := NewTable(g)
		if table.Join(data) != nil {
			return
		}
		var b bytes.Buffer
		if err := table.WriteJSON(&b); err != nil {
			t.Skip() // infinite numbers cannot be read, so none can be here
		}
		if err := table.Join(b.Bytes()); err != nil {
			t.Error(err)
		}
	})
}
