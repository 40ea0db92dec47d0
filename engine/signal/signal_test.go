package signal

import (
	"math"
	"strings"
	"testing"

	"escapement/engine/field"
	"escapement/engine/sim/simtest"
)

func source(t *testing.T, preset string) *Source {
	t.Helper()
	p := simtest.Preset(t, preset)
	return Of(p.Program, p.Log, field.New())
}

func TestLanesAreThoseAskedForInTheirOrder(t *testing.T) {
	for _, c := range []struct {
		name, preset, ask, want string
	}{
		{"leads and fixed lanes are not signals", "normal", "lead:II axis ladder device", ""},
		{"electrograms and membranes", "normal", "membrane:his egm:HISd lead:II egm:HRA", "membrane:his/His egm:HISd/HISd egm:HRA/HRA"},
		{"no device, no channels", "normal", "egm:A egm:V", ""},
		{"both channels", "dual-upper-rate-wenckebach", "egm:A egm:V", "egm:A/EGM A egm:V/EGM V"},
		{"what there is not", "normal", "egm:nowhere membrane:nowhere", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			var got []string
			for _, g := range source(t, c.preset).Lanes(strings.Fields(c.ask), 0) {
				got = append(got, g.Name+"/"+g.Label)
			}
			if got := strings.Join(got, " "); got != c.want {
				t.Errorf("got %q, want %q", got, c.want)
			}
		})
	}
}

// The His bundle's lanes are amplified twice as much (common practice); an action
// potential is 14 mm high at any gain.
func TestScales(t *testing.T) {
	s := source(t, "normal")
	for _, c := range []struct {
		name string
		gain float64
		want [3]float64
	}{
		{"usual", 0, [3]float64{10, 20, 0.12}},
		{"no number", math.NaN(), [3]float64{10, 20, 0.12}},
		{"chosen", 5, [3]float64{5, 10, 0.12}},
	} {
		for i, g := range s.Lanes([]string{"egm:HRA", "egm:HISd", "membrane:his"}, c.gain) {
			if g.MMPerMV != c.want[i] {
				t.Errorf("%s: %s at %g mm/mV, want %g", c.name, g.Name, g.MMPerMV, c.want[i])
			}
			if len(g.MV) != int(s.log.Span/1000) {
				t.Errorf("%s: %s has %d samples of %v ms", c.name, g.Name, len(g.MV), s.log.Span.MS())
			}
		}
	}
}

func TestNamed(t *testing.T) {
	for name, want := range map[string]bool{
		"lead:II": true, "axis": true, "ladder": true, "device": true, "egm:HISd": true, "egm:A": true, "membrane:av_junction": true,
		"": false, "lead:": false, "lead:V7": false, "lead:ii": false, "axis:": false, "egm:": false, "egm:B": false, "membrane:liver": false, "II": false,
	} {
		if got := Named(name); got != want {
			t.Errorf("%q: %v, want %v", name, got, want)
		}
	}
}
