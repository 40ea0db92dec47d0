package sim

import (
	"math/rand/v2"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// focusState is a focus between two discharges.
type focusState struct {
	gen         uint32 // of the cycle that runs
	start       tick.Time
	due         tick.Time
	cause       event.ID // what began the cycle; 0 for the start of the strip
	suppression float64  // S: the next cycle lasts 1+S times as long
	at          tick.Time
	random      *rand.Rand // nil until it is needed
	begun       bool       // a driver that has discharged and not ended
}

func (s *focusState) init(m *Machine, i int) {
	f := &m.h.Foci[i]
	if f.Driver != 0 {
		if s.due = tick.Time(m.quantise(tick.Dur(f.From))); f.Until == 0 || s.due < f.Until {
			m.push(s.due, classDischarge, i, 0, s.gen)
		}
		return
	}
	if f.First > 0 {
		s.due = tick.Time(m.quantise(f.First))
		s.start = s.due.Add(-tick.PerMinute(f.Rate.At(s.due)))
		m.push(s.due, classDischarge, i, 0, s.gen)
		return
	}
	m.cycle(i, 0)
}

// cycle begins a new cycle of a focus now.
func (m *Machine) cycle(i int, cause event.ID) {
	f, s := &m.h.Foci[i], &m.foci[i]
	s.gen++
	s.start, s.cause = m.now, cause
	length := f.Rate.Next(m.now, 1+s.suppression).Sub(m.now)
	if f.Jitter > 0 {
		length += tick.Dur((2*s.stream(m, i).Float64() - 1) * float64(f.Jitter))
	}
	if f.Driver == heart.Arrivals {
		length = f.Least + tick.Dur(float64(f.Mean-f.Least)*-portmath.Log(1-s.stream(m, i).Float64()))
	}
	s.due = m.now.Add(max(m.quantise(length), m.h.Quantum))
	if f.Driver == 0 || f.Until == 0 || s.due < f.Until {
		m.push(s.due, classDischarge, i, 0, s.gen)
	}
}

// stream is the focus's own random numbers.
func (s *focusState) stream(m *Machine, i int) *rand.Rand {
	if s.random == nil {
		s.random = rand.New(rand.NewPCG(m.prog.Seed, uint64(i)<<1|1))
	}
	return s.random
}

// discharges names the rule by which a focus discharges.
var discharges = [...]event.Rule{0: event.Phase4, heart.Reentry: event.Circuit, heart.Arrivals: event.Arrival}

// discharge fires a focus. The tissue around it may be refractory: then nothing
// leaves it, and its next cycle begins all the same.
func (m *Machine) discharge(i int) {
	f, s := &m.h.Foci[i], &m.foci[i]
	id := m.record(event.Event{Kind: event.Discharge, Rule: discharges[f.Driver], Site: f.Site, Path: event.None, Cause: s.cause})
	s.decay(f.OverdriveTau, m.now)
	s.begun = true
	m.cycle(i, id)
	st := &m.sites[f.Site]
	if st.id == 0 || m.now >= st.until {
		m.activate(&wave{rule: event.Fired, site: f.Site, path: event.None, cause: id, beat: m.now})
		return
	}
	m.record(event.Event{Kind: event.Block, Rule: event.SiteRefractory, Site: f.Site, Path: event.None, Cause: id,
		Recovery: m.now.Sub(st.last), Needed: st.until.Sub(st.last)})
}

// reset begins the cycles of the foci at a site that was depolarised, except
// where the focus is protected or did it itself.
func (m *Machine) reset(w *wave, id event.ID) {
	for i := range m.h.Foci {
		f, s := &m.h.Foci[i], &m.foci[i]
		if f.Site != w.site || f.Protected || w.rule == event.Fired && s.cause == w.cause {
			continue
		}
		if f.Driver != 0 {
			if !s.begun {
				continue
			}
			if m.now.Sub(s.start) < f.EndsBelow {
				s.gen, s.begun = s.gen+1, false
				continue
			}
		}
		s.decay(f.OverdriveTau, m.now)
		if f.OverdriveGain > 0 {
			own := f.Rate.Next(s.start, 1).Sub(s.start)
			if cut := 1 - float64(max(m.now.Sub(s.start), 0))/float64(own); cut > 0 {
				s.suppression += float64(f.OverdriveGain * cut)
			}
		}
		m.cycle(i, id)
	}
}

func (s *focusState) decay(tau tick.Dur, now tick.Time) {
	if s.suppression != 0 && tau > 0 {
		s.suppression = float64(s.suppression * portmath.Exp(-float64(now.Sub(s.at))/float64(tau)))
	}
	s.at = now
}
