package pacer_test

import (
	"fmt"
	"slices"

	"escapement/engine/event"
	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// runEvents lives through the world with the event-driven device. It looks every
// millisecond for signals, so that a timer that ends between two is a stimulus at
// a time that the fixed-step device cannot give.
func runEvents(s stepSettings, w *world) life {
	k := &kernel{world: w, hideEscape: s.mode.name == "DDD" && s.base == fromAtrium}
	d := pacer.New(s.settings(), k)
	d.Start(0)
	expire := func(upTo tick.Time) {
		for d.Due() <= upTo {
			k.now = d.Due()
			d.Expire(k.now)
		}
	}
	for t := 1; t < len(w.a); t++ {
		now := tick.Time(t) * tick.Time(tick.Millisecond)
		expire(now - 1)
		k.now = now
		for _, c := range []struct {
			there   bool
			channel pacer.Channel
			name    string
		}{{w.a[t], pacer.Atrial, "A "}, {w.v[t], pacer.Ventricular, "V "}} {
			if c.there && d.Senses(c.channel) {
				sensed := d.Sense(now, c.channel, k.next())
				k.out = append(k.out, record{now.MS(), c.name + sensed.Use.String() + k.misnamed(c.name, sensed)})
			}
		}
		expire(now)
	}
	return life{k.out, k.ended(tick.Time(len(w.a)-1) * tick.Time(tick.Millisecond))}
}

// settings are the same settings for the event-driven device.
func (s stepSettings) settings() pacer.Settings {
	ms := func(n int) tick.Dur { return tick.Dur(n) * tick.Millisecond }
	mode, err := pacer.ParseMode(s.mode.name)
	if err != nil {
		panic(err)
	}
	p := pacer.Settings{
		Mode: mode, LowerRate: 60000 / float64(s.lower), Base: []pacer.Base{
			fromVentricle: pacer.VentricularBase, fromAtrium: pacer.AtrialBase, fromEither: pacer.ModifiedBase}[s.base],
		PacedAV: ms(s.paced), SensedAV: ms(s.sensed), PVARP: ms(s.pvarp), PVAB: ms(s.pvab),
		AtrialBlanking: ms(s.blanking), AtrialRefractory: ms(s.arp), PAVB: ms(s.pavb),
		Crosstalk: ms(s.crosstalk), SafetyStimulus: s.safety, VentricularRefractory: ms(s.vrp),
		PostPVC: ms(s.afterPVC), RefractoryCounts: s.counts, PastLowerRate: s.past,
		Noise: pacer.Noise{Window: ms(s.noise)},
	}
	if s.upper > 0 {
		p.UpperRate = 60000 / float64(s.upper)
	}
	return p
}

// kernel is the Recorder of a run.
type kernel struct {
	world *world
	now   tick.Time
	last  event.ID
	out   []record
	spans []recorded

	hideEscape bool // see stepDevice.windows
}

type recorded struct {
	pacer.Window
	id   event.ID
	from tick.Time
}

func (k *kernel) next() event.ID {
	k.last++
	return k.last
}

func (k *kernel) Stimulate(p pacer.Pulse) event.ID {
	c, what := byte('V'), "VP"
	if p.Lead == pacer.RA {
		c, what = 'A', "AP"
	}
	k.out = append(k.out, record{k.now.MS(), what})
	k.world.stimulus(c, int(k.now/tick.Time(tick.Millisecond)))
	return k.next()
}

func (k *kernel) Open(w pacer.Window) event.ID {
	k.spans = append(k.spans, recorded{w, k.next(), k.now})
	return k.last
}

func (k *kernel) Close(id, _ event.ID) {
	for i := len(k.spans) - 1; i >= 0; i-- {
		if s := &k.spans[i]; s.id == id {
			if s.Until < k.now {
				panic(fmt.Sprintf("%v closed at %v", *s, k.now))
			}
			s.Until = k.now
			return
		}
	}
	panic(fmt.Sprintf("window %d closed but never opened", id))
}

// because says which windows may decide a use of a signal; "" for none.
var because = map[string][]string{
	"A blanked":    {"pvab", "atrial_blanking"},
	"A refractory": {"pvarp", "atrial_refractory", "av_delay", "upper_rate", "lower_rate", "crosstalk"},
	"A noise":      {"atrial_noise"},
	"A tracked":    {""},
	"A inhibits":   {"atrial_escape", ""},
	"A resets":     {"lower_rate", ""}, // none: the timer ends at this instant
	"V blanked":    {"pavb"},
	"V refractory": {"ventricular_refractory"},
	"V noise":      {"noise"},
	"V safety":     {"crosstalk"},
	"V inhibits":   {"av_delay", "upper_rate", "lower_rate", "crosstalk"}, // crosstalk: a safety stimulus, at its very instant
	"V resets":     {"atrial_escape", "lower_rate", ""},
}

// misnamed is a complaint if the window that decided did not run just before the
// signal, or is none that could decide; else nothing.
func (k *kernel) misnamed(channel string, s pacer.Sensed) string {
	name := ""
	for _, w := range k.spans {
		if w.id == s.Because && w.from <= k.now && k.now <= w.Until {
			name = w.Name.String()
		}
	}
	if slices.Contains(because[channel+s.Use.String()], name) && (name != "") == (s.Because != 0) {
		return ""
	}
	return fmt.Sprintf(" because of %q (%d)", name, s.Because)
}

func (k *kernel) Mode(_, _, _ string, _ event.ID) event.ID { return k.next() }

// ended are the windows that ended up to an instant.
func (k *kernel) ended(upTo tick.Time) []record {
	var rs []record
	for _, s := range k.spans {
		if k.hideEscape && s.Name == pacer.AtrialEscape {
			continue
		}
		if s.from < s.Until && s.Until <= upTo {
			rs = append(rs, record{s.from.MS(), fmt.Sprintf("%v, %v", s.Name, s.Until.MS())})
		}
	}
	inOrder(rs)
	return rs
}
