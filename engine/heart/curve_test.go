package heart

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"escapement/engine/tick"
)

// Exact consequences of the exponential curve, derived by hand from its formula
// (Shrier et al., Circulation 1987;76:1196, for the form).
func TestExactConsequencesOfTheCurve(t *testing.T) {
	c := Curve{MinMS: 100, AlphaMS: 300, TauMS: 120, Theta: Cycled{BaseMS: 150}}
	// f(150) = 100 + 300 exp(-1.25) = 185.951; 1:1 limit = 150 + 185.951.
	near(t, "1:1 limit", c.ShortestOneToOne(), 335.95, 0.25)
	// -(300/120) exp(-150/120)
	near(t, "slope at theta", c.Slope(150), -0.716, 0.001)
	a, ok := c.Steady(400)
	if !ok {
		t.Fatal("no 1:1 conduction at 400")
	}
	near(t, "steady delay at 400", a, 132.207, 0.01)
	if _, ok := c.Steady(335); ok {
		t.Error("1:1 conduction at 335, below the limit of 335.95")
	}
	// r* = 100 ln 6 = 179.176; 179.176 + 80 + 100 = 359.176. (The identity is
	// Simson, Spear and Moore 1979's, from memory; the arithmetic is ours.)
	steep := Curve{MinMS: 80, AlphaMS: 600, TauMS: 100, Theta: Cycled{BaseMS: 100}}
	near(t, "functional refractory period", steep.Functional(), 359.18, 0.1)
	shallow := Curve{MinMS: 80, AlphaMS: 60, TauMS: 100, Theta: Cycled{BaseMS: 100}}
	near(t, "functional refractory period, shallow", shallow.Functional(), 180+60*math.Exp(-1), 0.001)
}

func near(t *testing.T, name string, got, want, tol float64) {
	t.Helper()
	if math.Abs(got-want) > tol || math.IsNaN(got) {
		t.Errorf("%s = %.4f, want %.4f ± %g", name, got, want, tol)
	}
}

// Ashman's phenomenon, four beats of a didactic atlas (its figure 112): preceding
// and current cycle, and whether the beat is aberrant. The default right bundle
// (340 ms at 600, slope of Denes 1974) must get all four right.
func TestAshmanBeats(t *testing.T) {
	rb := Cycled{BaseMS: 340, PerCycle: SlopeBundle, CycleMS: DriveMS}
	for _, b := range []struct {
		preceding, current float64
		aberrant           bool
	}{{705, 485, false}, {1720, 485, true}, {1130, 500, false}, {1130, 465, true}} {
		if got := b.current < rb.At(tick.MS(b.preceding)).MS(); got != b.aberrant {
			t.Errorf("%v after %v: aberrant %v, want %v", b.current, b.preceding, got, b.aberrant)
		}
	}
}

func TestRateIntegrates(t *testing.T) {
	for _, c := range []struct {
		name   string
		rate   Rate
		from   tick.Time
		cycles float64
		want   tick.Time
	}{
		{"constant", Constant(75), 0, 1, 800000},
		{"part of a cycle", Constant(60), 500000, 0.5, 1000000},
		// Half a cycle at 60/min takes 500 ms, the other half at 120/min 250 ms.
		{"step", Rate{{0, 60}, {500000, 60}, {500000, 120}}, 0, 1, 750000},
		// 60 to 120/min over 10 s: 1 + 0.5*0.1*t^2... t + 0.05 t^2 = 1 gives t = 0.954451 s.
		{"ramp", Rate{{0, 60}, {0, 60}, {10000000, 120}}, 0, 1, 954451},
		{"after a ramp", Rate{{0, 60}, {1000000, 60}, {2000000, 120}}, 5000000, 2, 6000000},
	} {
		if got := c.rate.Next(c.from, c.cycles); got != c.want {
			t.Errorf("%s: next at %d, want %d", c.name, got, c.want)
		}
	}
}

func TestRateNextIsAdditive(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		rate := Constant(rapid.Float64Range(20, 200).Draw(r, "bpm"))
		for at := tick.Time(0); len(rate) < 6; {
			at += tick.Time(rapid.Int64Range(0, 3e6).Draw(r, "gap"))
			rate = append(rate, Knot{at, rapid.Float64Range(20, 200).Draw(r, "to")})
		}
		from := tick.Time(rapid.Int64Range(0, 5e6).Draw(r, "from"))
		a, b := rapid.Float64Range(0.01, 3).Draw(r, "a"), rapid.Float64Range(0.01, 3).Draw(r, "b")
		once, twice := rate.Next(from, a+b), rate.Next(rate.Next(from, a), b)
		if d := once - twice; d > 3 || d < -3 {
			r.Fatalf("%v cycles at once end at %d, in two parts at %d", a+b, once, twice)
		}
		if once <= from {
			r.Fatalf("no time passes: %d to %d", from, once)
		}
	})
}
