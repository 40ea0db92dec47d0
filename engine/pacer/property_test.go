package pacer

import (
	"slices"
	"testing"

	"escapement/engine/event"
	"escapement/engine/tick"
	"pgregory.net/rapid"
)

// anySettings draws settings that may run together.
func anySettings(rt *rapid.T) Settings {
	dur := func(name string, lo, hi float64) tick.Dur { return ms(rapid.Float64Range(lo, hi).Draw(rt, name)) }
	off := func(d tick.Dur) tick.Dur { return tick.Dur(rapid.IntRange(0, 1).Draw(rt, "on")) * d }
	flip := rapid.Bool()
	s := Settings{
		LowerRate: rapid.Float64Range(40, 90).Draw(rt, "lower"), UpperRate: rapid.Float64Range(95, 170).Draw(rt, "upper"),
		PacedAV: dur("pav", 60, 300), SensedAV: dur("sav", 40, 250), PVARP: dur("pvarp", 150, 500), AtrialBlanking: dur("blanking", 0, 150),
		AtrialRefractory: dur("arp", 150, 400), PAVB: dur("pavb", 0, 50), Crosstalk: dur("crosstalk", 60, 120), SafetyStimulus: flip.Draw(rt, "safety"),
		VentricularRefractory: dur("vrp", 150, 340), PostPVC: off(dur("pvc", 300, 500)), RefractoryCounts: flip.Draw(rt, "counts"),
		PastLowerRate: flip.Draw(rt, "past"), AtrialDelay: off(dur("delay", 200, 400)), Base: Base(rapid.IntRange(0, 2).Draw(rt, "base")),
	}
	s.PVAB = dur("pvab", 0, min(250, s.PVARP.MS()))
	s.Mode, _ = ParseMode(rapid.SampledFrom(Modes).Draw(rt, "mode"))
	if flip.Draw(rt, "rate") {
		s.Mode.Rate = 'R'
		s.Sensor = Sensor{Slope: 80, Limit: rapid.Float64Range(95, 150).Draw(rt, "limit"), Rise: ms(2000), Fall: ms(3000), Activity: []Activity{{2000000, 1}, {6000000, 0.3}}}
	}
	if flip.Draw(rt, "adaptive") {
		s.AdaptiveAV, s.AdaptivePVARP = Adaptive{70, 130, ms(60)}, Adaptive{70, 130, ms(150)}
	}
	if flip.Draw(rt, "hysteresis") {
		s.Hysteresis = Hysteresis{30, 3, 2}
	}
	switch rapid.IntRange(0, 3).Draw(rt, "av") {
	case 1:
		s.LongerAV = LongerAV{ms(100), ms(350), 4, 1}
	case 2:
		s.ShorterAV = ShorterAV{ms(30), ms(60), 5}
	}
	if flip.Draw(rt, "noise") {
		s.Noise.Window = ms(100)
	}
	if flip.Draw(rt, "change") {
		s.ChangeLimit = ChangeLimit{12, 9}
	}
	if flip.Draw(rt, "stabilise") {
		s.Stabilise = Stabilise{ms(100), 100, false}
	}
	if flip.Draw(rt, "night") {
		s.Night = Night{35, 3000000, 7000000}
	}
	if flip.Draw(rt, "fall") {
		s.Fall = Fall{90, 4 * tick.Second, 1, 100, 3 * tick.Second}
	}
	if s.Mode.Tracks() && flip.Draw(rt, "switch") {
		s.Switch = Switch{170, 3, 5, Mode{}, 2, off(ms(60))}
		if flip.Draw(rt, "to VVI") {
			s.Switch.Mode = fixed("VVI")
		}
	}
	if flip.Draw(rt, "loop") {
		s.Loop = Loop{3, ms(10), ms(30), ms(450), flip.Draw(rt, "withhold")}
	}
	if s.Mode.String()[:3] == "DDD" && flip.Draw(rt, "backup") {
		s.Backup = Backup{2, 4, ms(80), ms(2000), ms(8000)}
	}
	if s.Mode.Paced != 'O' && flip.Draw(rt, "magnet") {
		to := []string{"AOO", "VOO", "DOO"}
		if !s.Mode.dual() {
			to = []string{string(s.Mode.Paced) + "OO"}
		}
		s.Magnet = Magnet{fixed(rapid.SampledFrom(to).Draw(rt, "magnet mode")), 85, off(ms(100)), 4000000, 6000000}
	}
	if flip.Draw(rt, "sites") {
		s.Mode.Multisite, s.Sites = 'V', Sites{Left: true, Offset: ms(-30), Point: off(ms(20)), ToRV: flip.Draw(rt, "to right"), Only: flip.Draw(rt, "only")}
	}
	return s
}

// anyHeart draws signals and answers.
func anyHeart(rt *rapid.T) func(*rig) {
	type chamber struct {
		kind         int
		first, cycle float64
		at           []float64
	}
	var draws []chamber
	for range 2 {
		draws = append(draws, chamber{rapid.IntRange(0, 3).Draw(rt, "rhythm"), rapid.Float64Range(10, 900).Draw(rt, "first"),
			rapid.Float64Range(180, 1300).Draw(rt, "cycle"), rapid.SliceOfN(rapid.Float64Range(1, 12000), 0, 60).Draw(rt, "signals")})
	}
	up, down := rapid.Float64Range(0, 500).Draw(rt, "va"), rapid.Float64Range(0, 400).Draw(rt, "ar")
	return func(r *rig) {
		for i, d := range draws {
			ch := Channel(i + 1)
			if d.kind&1 != 0 {
				r.every(ch, d.first, d.cycle, 12000)
			}
			if d.kind&2 != 0 {
				r.at(ch, d.at...)
			}
		}
		r.paced = func(p Pulse) {
			if p.Lead == RA && down > 20 {
				r.soonSignal(Ventricular, down)
			} else if p.Lead != RA && p.Timer != OffsetTimer && up > 20 {
				r.soonSignal(Atrial, up)
			}
		}
	}
}

func TestEverySettingAndRhythm(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		s := anySettings(rt)
		if f := s.Faults(); len(f) > 0 {
			rt.Skip(f)
		}
		live := anyHeart(rt)
		r, twin := newRig(rt, s), newRig(rt, s)
		live(r)
		live(twin)
		r.run(12000)
		checkUpperRate(rt, &s, r)
		checkForbidden(rt, &s, r)
		checkLongest(rt, &s, r)
		if twin.run(12000); !slices.Equal(r.record, twin.record) {
			rt.Fatalf("the same twice differs:\n%s\n%s", r.text(0), twin.text(0))
		}
	})
}

// isV tells whether an entry is a ventricular event for the timing.
func isV(e entry) bool {
	return e.what == "VP" && e.timer != OffsetTimer || e.what == "VS" && (e.use == event.Resets || e.use == event.Inhibits)
}

// checkUpperRate: a stimulus for a tracked P comes no sooner after a ventricular event
// than the upper-rate interval.
func checkUpperRate(rt *rapid.T, s *Settings, r *rig) {
	var last tick.Time = -tick.Never
	tracked := map[event.ID]bool{}
	for _, e := range r.record {
		if e.use == event.Tracked {
			tracked[e.id] = true
		}
		if !isV(e) {
			continue
		}
		if e.what == "VP" && tracked[e.cause] && e.at.Sub(last) < interval(s.UpperRate) {
			rt.Fatalf("tracked stimulus at %v, %v after the last ventricular event\n%s", e.at, e.at.Sub(last), r.text(0))
		}
		last = e.at
	}
}

// checkForbidden: no ventricular stimulus in a ventricular refractory period that is
// not there for noise, and no atrial stimulus in an AV delay.
func checkForbidden(rt *rapid.T, s *Settings, r *rig) {
	inside := func(n WindowName, at tick.Time) bool {
		for _, w := range r.windows {
			if w.Name == n && w.Why != ByNoise && w.from < at && at < w.Until {
				return true
			}
		}
		return false
	}
	for _, e := range r.record {
		switch {
		case e.what == "VP" && e.timer != OffsetTimer && inside(VentricularRefractory, e.at):
			rt.Fatalf("ventricular stimulus (%v) in the refractory period at %v\n%s", e.timer, e.at, r.text(0))
		case e.what == "AP" && inside(AVDelay, e.at):
			rt.Fatalf("atrial stimulus (%v) in an AV delay at %v\n%s", e.timer, e.at, r.text(0))
		case e.what == "AP" && !s.Mode.PacesA() && s.Magnet.Mode == (Mode{}), e.what == "VP" && !s.Mode.PacesV() && s.Magnet.Mode == (Mode{}):
			rt.Fatalf("%s in %v", e.what, s.Mode)
		}
	}
}

// checkLongest: no pause is longer than the longest interval set, an AV delay and
// what may be added to it once.
func checkLongest(rt *rapid.T, s *Settings, r *rig) {
	if s.Mode.Paced == 'O' || s.Magnet.Mode != (Mode{}) {
		return
	}
	longest := interval(s.LowerRate)
	if s.Hysteresis.Rate > 0 {
		longest = interval(s.Hysteresis.Rate)
	}
	if s.Night.Rate > 0 {
		longest = max(longest, interval(s.Night.Rate))
	}
	bound := longest + s.AtrialDelay
	if s.Mode.PacesV() && s.Mode.SensesA() || s.Mode.dual() {
		bound += max(s.PacedAV+s.LongerAV.By, s.SensedAV+s.LongerAV.By, interval(s.UpperRate))
	}
	if s.Loop.Withhold && s.Mode.Tracks() {
		bound += longest
	}
	if s.Backup.Misses > 0 {
		bound += longest + s.Backup.Delay
	}
	if s.Mode.Triggers() {
		bound = longest
	}
	var last tick.Time
	for _, e := range r.record {
		beat := isV(e)
		if s.Mode.atrialOnly() {
			beat = e.what == "AP" || e.use == event.Resets
		}
		if !beat {
			continue
		}
		if e.at.Sub(last) > bound {
			rt.Fatalf("pause of %v before %v, longest allowed %v\n%s\n%q", e.at.Sub(last), e.at, bound, r.text(0), r.modes)
		}
		last = e.at
	}
	if tick.Time(ms(12000)).Sub(last) > bound {
		rt.Fatalf("nothing after %v\n%s", last, r.text(0))
	}
}
