package pacer_test

import (
	"escapement/engine/event"
	"escapement/engine/pacer"
	"escapement/engine/tick"
)

// runEvents lives through the world with the event-driven device. It looks every
// millisecond for signals, so that a timer that ends between two is a stimulus at
// a time that the fixed-step device cannot give.
func runEvents(s stepSettings, w *world) []record {
	k := &kernel{world: w}
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
				use := d.Sense(now, c.channel, k.next()).Use
				k.out = append(k.out, record{now.MS(), c.name + use.String()})
			}
		}
		expire(now)
	}
	return k.out
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

func (k *kernel) Open(pacer.Window) event.ID               { return k.next() }
func (k *kernel) Close(_, _ event.ID)                      {}
func (k *kernel) Mode(_, _, _ string, _ event.ID) event.ID { return k.next() }
