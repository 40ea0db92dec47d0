package handle

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/pacer"
)

// end is how the end of a window came to stand where it does. One that an event ended
// is ruled by that.
func (m *Mover) end(w *event.Event) span {
	if w.By != 0 || m.set.device == nil {
		return span{after: w.By}
	}
	s := &m.set
	length := w.Until.Sub(w.T).MS()
	whole := func(name string) span { // the plain setting, if that is its length
		r := s.at(name, w.T)
		if r.per = 1; math.Abs(r.value-length) > 0.01 {
			return span{after: before0(w)}
		}
		return ruled(before0(w), r)
	}
	switch w.Field {
	case "av_delay":
		return m.avDelay(w, length)
	case "atrial_escape", "lower_rate":
		return m.escape(w, length)
	case "upper_rate":
		return ruled(before0(w), s.rate("max_tracking_rate_bpm", w.T))
	case "pvarp":
		return m.pvarp(w, length)
	case "crosstalk":
		r := s.at("crosstalk_window_ms", w.T)
		r.per = 1
		return ruled(before0(w), r)
	case "atrial_delay":
		r := s.at("atrial_delay_ms", w.T)
		r.per = 1
		return ruled(before0(w), r)
	case "backup_delay":
		return whole("backup.delay_ms")
	case "pvab", "atrial_blanking", "atrial_refractory", "pavb", "ventricular_refractory":
		return whole(w.Field + "_ms")
	}
	return span{after: before0(w)}
}

// avDelay: paced or sensed by what began it, and whichever feature changed its length.
func (m *Mover) avDelay(w *event.Event, length float64) span {
	s := &m.set
	d, after := s.device, before0(w)
	name, base := "sensed_av_ms", s.at("sensed_av_ms", w.T)
	if c := m.log.At(after); c != nil && c.Kind == event.Stimulus {
		name, base = "paced_av_ms", s.at("paced_av_ms", w.T)
	}
	base.per = 1
	by := func(name string, per float64) span {
		r := s.at(name, w.T)
		r.per = per
		return ruled(after, r, base.term)
	}
	switch w.Why {
	case pacer.ByMagnet:
		r := s.at("magnet.av_ms", w.T)
		r.per = 1
		return ruled(after, r)
	case pacer.ByLonger:
		if most := d.LongerAV.Longest.MS(); most > 0 && base.value+d.LongerAV.By.MS() > most {
			return by("longer_av.longest_ms", 1)
		}
		return by("longer_av.by_ms", 1)
	case pacer.ByShorter:
		if length <= d.ShorterAV.Shortest.MS() {
			return by("shorter_av.shortest_ms", 1)
		}
		return by("shorter_av.by_ms", -1)
	}
	switch a := &d.AdaptiveAV; {
	case a.To > a.From:
		if name == "paced_av_ms" && base.value > a.Shortest.MS() {
			return m.shortened(after, base, s.at("adaptive_av.shortest_ms", w.T), length)
		}
	case d.Sites.Left: // the stimuli of both ventricles share what the delay leaves
	case math.Abs(length-base.value) > 0.01: // cut short, as by the lower rate in VDD
		return span{after: after}
	}
	return ruled(after, base)
}

// shortened is a length that falls from one value to another as the rate rises.
func (m *Mover) shortened(after event.ID, base, shortest rule, length float64) span {
	part := math.Min(1, math.Max(0, (base.value-length)/(base.value-shortest.value)))
	if base.per, shortest.per = 1-part, part; part > 0.9 {
		return ruled(after, shortest, base.term)
	}
	return ruled(after, base, shortest.term)
}

func (m *Mover) pvarp(w *event.Event, length float64) span {
	s, after := &m.set, before0(w)
	name := "pvarp_ms"
	switch w.Why {
	case pacer.ByPVC:
		name = "post_pvc_pvarp_ms"
	case pacer.ByLoop:
		name = "loop.pvarp_ms"
	case pacer.ByRate:
		return m.shortened(after, s.at("pvarp_ms", w.T), s.at("adaptive_pvarp.shortest_ms", w.T), length)
	}
	r := s.at(name, w.T)
	r.per = 1
	return ruled(after, r)
}

// rates that may set an escape interval, by the reason on the record.
var rates = map[string]string{ // looked up only
	"": "lower_rate_bpm", pacer.ByHysteresis: "hysteresis.rate_bpm", pacer.ByNight: "night.rate_bpm", pacer.ByFall: "rate_fall.rate_bpm", pacer.ByMagnet: "magnet.rate_bpm",
}

// escape: an interval of a rate, less the AV delay that will follow where the atrium is
// paced and the interval counts from the ventricle.
func (m *Mover) escape(w *event.Event, length float64) span {
	s, after := &m.set, before0(w)
	var r rule
	if name := rates[w.Why]; name != "" {
		r = s.rate(name, w.T)
	}
	if w.Field == "lower_rate" {
		return ruled(after, r)
	}
	if s.device.Base == pacer.VentricularBase {
		out := ruled(after, r)
		out.terms = append(out.terms, m.following(w)...)
		return out
	}
	if r.path == "" {
		return span{after: after}
	}
	if av := s.at("paced_av_ms", w.T); math.Abs(60000/r.value-length-av.value) < 0.01 {
		return ruled(after, r, term{av.path, -1})
	}
	// It counts from the atrial event of the beat.
	if v := m.log.At(after); v != nil && v.Kind == event.Stimulus && (v.Field == "av_delay" || v.Field == "upper_rate") {
		after = before0(v)
	}
	return ruled(after, r)
}

// following is what the AV delay that follows an escape interval takes from it. Its
// length is seen where the atrial stimulus came.
func (m *Mover) following(w *event.Event) []term {
	s := &m.set
	av, a := s.at("paced_av_ms", w.T), &s.device.AdaptiveAV
	if w.Why == pacer.ByMagnet && s.device.Magnet.AV > 0 {
		av = s.at("magnet.av_ms", w.T)
	}
	if a.To <= a.From || av.value <= a.Shortest.MS() {
		return []term{{av.path, -1}}
	}
	for i := int(w.ID); i < len(m.log.Events) && m.log.Events[i].T <= w.Until; i++ {
		if d := &m.log.Events[i]; d.Kind == event.Window && d.Field == "av_delay" && d.T == w.Until {
			part := math.Min(1, math.Max(0, (av.value-d.Until.Sub(d.T).MS())/(av.value-a.Shortest.MS())))
			return []term{{av.path, part - 1}, {s.at("adaptive_av.shortest_ms", w.T).path, -part}}
		}
	}
	return nil
}
