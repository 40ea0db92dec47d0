package sweep

import (
	"fmt"
	"math"
	"testing"

	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// ratio is a pattern in its lowest terms.
func ratio(ps, vs int) string {
	a, b := ps, vs
	for b > 0 {
		a, b = b, a%b
	}
	return fmt.Sprintf("%d:%d", ps/a, vs/a)
}

// settledRatio is the pattern of a point in its lowest terms.
func settledRatio(t testing.TB, table *Table, point int) string {
	word := table.get(t, point, "pattern").Word()
	var ps, vs int
	if _, err := fmt.Sscanf(word, "%d:%d", &ps, &vs); err != nil || vs == 0 {
		return word
	}
	return ratio(ps, vs)
}

// The map of the upper rate: sinus rate by 1/min against PVARP and against the sensed
// AV delay by 10 ms, for a heart that does not conduct, each point against the closed
// forms of the timing cycle: 1:1 as far as the longer of MTRI and TARP, 2:1 from
// 60000/TARP on (rule read: Furman, PACE 1985;8:197; Liryc), in between Wenckebach by
// the pattern that pacer.Pattern steps, with the longest AV delay MTRI - PVARP never
// passed, and N = floor((PP - TARP)/(MTRI - PP)) + 2 where the pause is not shorter
// than MTRI (derived).
func TestUpperRateMap(t *testing.T) {
	const upper = 100.0
	step := "1"
	if testing.Short() {
		step = "7"
	}
	for _, c := range []struct {
		name, y    string
		sav, pvarp func(y float64) float64
	}{
		{"PVARP", `"field":"pacemaker.pvarp_ms","from":200,"to":400,"step":10`, func(float64) float64 { return 150 }, func(y float64) float64 { return y }},
		{"AV delay", `"field":"pacemaker.sensed_av_ms","from":80,"to":250,"step":10`, func(y float64) float64 { return y }, func(float64) float64 { return 250 }},
	} {
		t.Run(c.name, func(t *testing.T) {
			g := grid(t, 60000, `"sinus":{"first_ms":1000,"exit":{"theta_ms":100}},"atria":{"erp_ms":100,"erp_per_cycle":0},`+noAV, fmt.Sprintf(`{"max_tracking_rate_bpm":%g,"pvab_ms":50,"lower_rate_bpm":30}`, upper), ``,
				`"x":{"field":"heart.sinus.rate_bpm","from":61,"to":200,"step":`+step+`},"y":{`+c.y+`},"outcomes":["pattern","v_rate_bpm","v_interval_min_ms","v_interval_max_ms","av_min_ms","av_max_ms"]`)
			table := all(t, g, Settings{})
			seen := map[string]int{} // counted only
			for p := range g.Len() {
				at := g.At(p)
				y := at[1].Number
				k := upperPoint{t, table, p, tick.PerMinute(at[0].Number), tick.PerMinute(upper), tick.MS(c.sav(y)), tick.MS(c.pvarp(y))}
				seen[k.check()]++
			}
			for _, kind := range []string{"1:1", "Wenckebach", "N formula", "2:1"} {
				if seen[kind] < 10 {
					t.Errorf("%d points of the map are %s, of %v", seen[kind], kind, seen)
				}
			}
		})
	}
}

type upperPoint struct {
	testing.TB
	table                *Table
	point                int
	pp, mtri, sav, pvarp tick.Dur
}

func (k *upperPoint) near(name string, got float64, want tick.Dur) {
	k.Helper()
	if math.Abs(got-want.MS()) > 0.01 {
		k.Errorf("PP %v SAV %v PVARP %v: %s %v, want %v", k.pp, k.sav, k.pvarp, name, got, want)
	}
}

// check judges a point and says what kind it is.
func (k *upperPoint) check() string {
	k.Helper()
	get := func(name string) float64 { return k.table.get(k, k.point, name).Mean }
	tarp := k.sav + k.pvarp
	ps, vs := pacer.Pattern(k.pp, k.mtri, k.sav, k.pvarp)
	if vs == 0 {
		return "no pattern within 256" // the stepped rule does not repeat soon enough
	}
	got, want := settledRatio(k, k.table, k.point), ratio(ps, vs)
	if got != want && !(got == "varies" && ps > 20) {
		k.Errorf("PP %v SAV %v PVARP %v: %s, want %s", k.pp, k.sav, k.pvarp, got, want)
	}
	k.near("shortest AV", get("av_min_ms"), k.sav)
	longest := get("av_max_ms")
	switch {
	case k.pp >= max(k.mtri, tarp):
		k.near("longest AV", longest, k.sav)
		k.near("longest V-V", get("v_interval_max_ms"), k.pp)
		k.want(want, "1:1")
		return "1:1"
	case k.pp >= tarp: // and shorter than MTRI
		if ceiling := (k.mtri - k.pvarp).MS(); longest > ceiling+0.01 {
			k.Errorf("PP %v SAV %v PVARP %v: AV delay of %v, longer than MTRI - PVARP = %v", k.pp, k.sav, k.pvarp, longest, ceiling)
		}
		return k.wenckebach(want, longest)
	case k.mtri <= tarp && ps == 2:
		k.near("longest AV", longest, k.sav)
		k.near("shortest V-V", get("v_interval_min_ms"), 2*k.pp)
		k.want(want, "2:1")
		return "2:1"
	case ps == 2 && vs == 1:
		k.near("mean V-V", 60000/get("v_rate_bpm"), 2*k.pp)
		return "2:1"
	}
	return "fewer"
}

func (k *upperPoint) want(got, want string) {
	k.Helper()
	if got != want {
		k.Errorf("PP %v SAV %v PVARP %v: closed form %s, stepped %s", k.pp, k.sav, k.pvarp, want, got)
	}
}

// wenckebach judges a point between TARP and MTRI by the closed forms, where the pause
// is not shorter than MTRI.
func (k *upperPoint) wenckebach(pattern string, longest float64) string {
	k.Helper()
	growth := k.mtri - k.pp
	n := int((k.pp-k.sav-k.pvarp)/growth) + 2
	pause := 2*k.pp - tick.Dur(n-1)*growth
	if pause < k.mtri {
		return "Wenckebach"
	}
	k.want(pattern, fmt.Sprintf("%d:%d", n+1, n))
	k.near("longest AV", longest, k.sav+tick.Dur(n-1)*growth)
	k.near("longest V-V", k.table.get(k, k.point, "v_interval_max_ms").Mean, pause)
	k.near("shortest V-V", k.table.get(k, k.point, "v_interval_min_ms").Mean, k.mtri)
	return "N formula"
}
