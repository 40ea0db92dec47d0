package pacer

import (
	"escapement/engine/event"
	"escapement/engine/tick"
)

// shortestAV keeps every AV delay, however shortened, above nothing.
const shortestAV = 10 * tick.Millisecond

// startAV begins the AV delay of an atrial event.
func (d *Device) startAV(id event.ID, paced bool) {
	av, why := d.avDelay(paced)
	due, timer := d.now.Add(av), AVTimer
	if !paced {
		if limit, by := d.trackable(); limit > due {
			due, timer = limit, by
		}
		if lower := d.timers[slotVentricle]; d.mode.Paced == 'V' && !d.s.PastLowerRate && lower.at <= due {
			// A late P in VDD: the stimulus comes at the lower rate all the same.
			d.avRunning = true
			d.open(AVDelay, min(av, lower.at.Sub(d.now)), id, why)
			return
		}
	}
	if d.mode.Paced == 'V' && d.s.PastLowerRate {
		d.close(LowerRate, id) // nothing comes of its end now
	}
	d.avRunning = true
	d.open(AVDelay, av, id, why)
	d.set(slotVentricle, due, deadline{timer: timer, cause: id, why: why})
}

// avDelay is the AV delay for an atrial event now, to the first ventricular stimulus.
func (d *Device) avDelay(paced bool) (tick.Dur, string) {
	if paced && d.plannedAV > 0 {
		return d.plannedAV, d.whyAV()
	}
	if paced {
		return d.pacedAV(d.aa), d.whyAV()
	}
	return d.lengthAV(d.s.SensedAV, d.aa), d.whyAV()
}

// pacedAV is the paced AV delay at an atrial interval.
func (d *Device) pacedAV(interval tick.Dur) tick.Dur {
	if d.magnet && d.s.Magnet.AV > 0 {
		return d.s.Magnet.AV
	}
	return d.lengthAV(d.s.PacedAV, interval)
}

func (d *Device) lengthAV(av, interval tick.Dur) tick.Dur {
	av -= d.s.PacedAV - d.s.AdaptiveAV.at(d.s.PacedAV, interval)
	if d.longer.on {
		av += d.s.LongerAV.By
		if d.s.LongerAV.Longest > 0 {
			av = min(av, d.s.LongerAV.Longest)
		}
	}
	if d.shorter.by > 0 {
		av = max(min(av, d.s.ShorterAV.Shortest), av-d.shorter.by)
	}
	return max(shortestAV, av-d.s.Sites.ahead(d.mode))
}

func (d *Device) whyAV() string {
	switch {
	case d.magnet && d.s.Magnet.AV > 0:
		return ByMagnet
	case d.longer.on:
		return ByLonger
	case d.shorter.by > 0:
		return ByShorter
	}
	return ""
}

// at is the length at an interval, base outside the range of rates.
func (a *Adaptive) at(base, interval tick.Dur) tick.Dur {
	if a.To <= a.From || interval <= 0 || a.Shortest >= base {
		return base
	}
	part := (interval.BPM() - a.From) / (a.To - a.From)
	part = min(1, max(0, part))
	return base - tick.Dur(float64(part*float64(base-a.Shortest))+0.5)
}

// longerState is the longer AV delay's search.
type longerState struct {
	on     bool
	paced  int // ventricular stimuli since the heart last conducted
	misses int // of them at the end of the longer delay
}

// shorterState is the shortening found by the last conducted beat.
type shorterState struct {
	by    tick.Dur
	paced int
}

// learnAV adapts the AV delays to the ventricular event that ends one.
func (d *Device) learnAV(conducted, paced bool) {
	if !d.avRunning {
		return
	}
	if d.s.LongerAV.By > 0 {
		d.longer.learn(&d.s.LongerAV, conducted)
	}
	if d.s.ShorterAV.By > 0 {
		d.learnShorter(conducted, paced)
	}
}

func (l *longerState) learn(s *LongerAV, conducted bool) {
	if conducted {
		*l = longerState{on: true}
		return
	}
	l.paced++
	if l.on {
		if l.misses++; l.misses >= max(1, s.Misses) {
			*l = longerState{}
		}
	} else if s.Every > 0 && l.paced >= s.Every {
		*l = longerState{on: true}
	}
}

func (d *Device) learnShorter(conducted, paced bool) {
	if conducted {
		running := d.s.SensedAV
		if d.a.paced {
			running = d.s.PacedAV
		}
		found := d.now.Sub(d.a.at)
		d.shorter = shorterState{by: max(0, running-found+d.s.ShorterAV.By)}
		return
	}
	if d.shorter.paced++; paced && d.s.ShorterAV.Beats > 0 && d.shorter.paced >= d.s.ShorterAV.Beats {
		d.shorter = shorterState{}
	}
}
