package handle

import (
	"fmt"
	"strconv"
	"strings"

	"escapement/engine/event"
	"escapement/engine/pacer"
	"escapement/engine/plan"
)

// Setting is a value of the plan that had a part in an event.
type Setting struct {
	Path  string
	Label string
	Unit  string
	Value float64
}

// Settings lists the values of the plan that had a part in an event: what ruled the
// length of a window or the time of a stimulus, which refractory period blocked, which
// delay it took. They are links, not the whole of the reason.
func (m *Mover) Settings(id event.ID) []Setting {
	e := m.log.At(id)
	if e == nil || len(m.spans) == 0 {
		return nil
	}
	var out []Setting
	for _, path := range m.names(e) {
		if path == "" {
			continue
		}
		r := rule{}
		if strings.HasPrefix(path, "interventions[") {
			r = m.spans[e.ID-1].rule
		} else if m.p.Absent(full(path)) {
			continue
		} else {
			r = m.set.at(path, e.T)
		}
		f, ok := plan.FieldAt(r.path)
		if !ok || len(out) > 0 && out[len(out)-1].Path == r.path {
			continue
		}
		out = append(out, Setting{r.path, m.set.label(r.path, f.Label), r.unit, r.value})
	}
	return out
}

const flutterCycle = "heart.atria.flutter.cycle_ms"

// names are the paths, those of the device without their stem.
func (m *Mover) names(e *event.Event) []string {
	switch e.Kind {
	case event.Window:
		return m.ofWindow(e)
	case event.Stimulus:
		if e.Rule != event.Timed {
			return []string{m.spans[e.ID-1].rule.path}
		}
		return m.ofTimer(e)
	case event.Sense:
		return m.ofSense(e)
	case event.Discharge:
		switch e.Rule {
		case event.Circuit:
			return []string{flutterCycle}
		case event.Arrival:
			return []string{"heart.atria.fibrillation.cycle_ms", "heart.atria.fibrillation.shortest_ms"}
		}
		if f := m.set.focus[e.Site]; f != nil && !f.twice {
			if e.Cause == 0 && f.first > 0 {
				return []string{f.path + "first_ms"}
			}
			return []string{f.path + "rate_bpm"}
		}
	case event.Block:
		return m.ofBlock(e)
	case event.Activate:
		if e.Rule == event.Conducted && e.Path >= 0 {
			if way, ok := m.pathway(e); ok {
				return []string{way + "_ms"}
			}
			return ofPath(m.log.Paths[e.Path].Name, e.Dir, false)
		}
	}
	return nil
}

func (m *Mover) ofWindow(w *event.Event) []string {
	switch w.Field {
	case "av_delay":
		base := "sensed_av_ms"
		if c := m.log.At(w.Cause); c != nil && c.Kind == event.Stimulus {
			base = "paced_av_ms"
		}
		switch w.Why {
		case pacer.ByMagnet:
			return []string{"magnet.av_ms"}
		case pacer.ByLonger:
			return []string{base, "longer_av.by_ms"}
		case pacer.ByShorter:
			return []string{base, "shorter_av.by_ms"}
		}
		return []string{base}
	case "atrial_escape":
		return []string{rates[w.Why], "paced_av_ms"}
	case "lower_rate":
		return []string{rates[w.Why]}
	case "upper_rate":
		return []string{"max_tracking_rate_bpm"}
	case "pvarp":
		switch w.Why {
		case pacer.ByPVC:
			return []string{"post_pvc_pvarp_ms"}
		case pacer.ByLoop:
			return []string{"loop.pvarp_ms"}
		case pacer.ByRate:
			return []string{"pvarp_ms", "adaptive_pvarp.shortest_ms"}
		}
		return []string{"pvarp_ms"}
	case "crosstalk":
		return []string{"crosstalk_window_ms"}
	case "noise", "atrial_noise":
		return []string{"noise.window_ms"}
	case "backup_delay":
		return []string{"backup.delay_ms"}
	case "withheld":
		return []string{"loop.beats"}
	}
	return []string{w.Field + "_ms"}
}

// ofTimer: what ruled the window that ended with a stimulus.
func (m *Mover) ofTimer(e *event.Event) []string {
	for id := e.ID - 1; id > 0 && e.T.Sub(m.log.At(id).T) < before; id-- {
		if w := m.log.At(id); w.Kind == event.Window && w.Field == timers[e.Field] && w.Until == e.T {
			out := m.ofWindow(w)
			if e.Field == "upper_rate" {
				out = append(out, "sensed_av_ms")
			}
			return out
		}
	}
	return nil
}

func (m *Mover) ofSense(e *event.Event) []string {
	var out []string
	if w := m.log.At(e.By); w != nil && w.Kind == event.Window {
		out = m.ofWindow(w)
	}
	if e.Use == event.Tracked {
		out = append(out, "sensed_av_ms", "pvarp_ms")
	}
	return out
}

func (m *Mover) ofBlock(e *event.Event) []string {
	if e.Path < 0 {
		return erp(m.log.Sites[e.Site].Tissue)
	}
	p := &m.log.Paths[e.Path]
	if way, ok := m.pathway(e); ok && e.Rule != event.SiteRefractory {
		switch e.Rule {
		case event.PathRefractory:
			return []string{way + "_erp_ms"}
		case event.OneWay:
			at := strings.LastIndexByte(way, '.') + 1
			return []string{way[:at] + "concealed_" + way[at:]}
		}
		return nil
	}
	if e.Rule == event.SiteRefractory {
		end := &m.log.Sites[p.Exit(e.Dir)]
		if end.Tissue == event.Purkinje {
			return []string{"heart.his_purkinje." + end.Name + ".erp_ms"}
		}
		return erp(end.Tissue)
	}
	return ofPath(p.Name, e.Dir, true)
}

// pathway is the stem of the values of the accessory pathway that an event is in, with
// the direction: "heart.pathways[0].down".
func (m *Mover) pathway(e *event.Event) (string, bool) {
	p := &m.log.Paths[e.Path]
	number, err := strconv.Atoi(strings.TrimPrefix(p.Name, "pathway_"))
	if p.Tissue != event.Accessory || err != nil {
		return "", false
	}
	way := "down"
	if e.Dir == event.Up {
		way = "up"
	}
	return fmt.Sprintf("heart.pathways[%d].%s", number-1, way), true
}

func erp(t event.Tissue) []string {
	switch t {
	case event.Atrium:
		return []string{"heart.atria.erp_ms"}
	case event.Ventricle:
		return []string{"heart.ventricles.erp_ms"}
	}
	return nil
}

// ofPath: the numbers that a path of the conduction system was made from.
func ofPath(name string, dir event.Dir, blocked bool) []string {
	const fast = "heart.av_node.fast."
	switch {
	case name == "sinoatrial" && blocked:
		return []string{"heart.sinus.exit.theta_ms"}
	case name == "sinoatrial":
		return []string{"heart.sinus.exit.min_ms"}
	case name == "av_fast" && dir == event.Up:
		return []string{fast + "va_ms"}
	case name == "av_fast" && blocked:
		return []string{fast + "erp_ms", fast + "wenckebach_cl_ms"}
	case name == "av_fast":
		return []string{fast + "ah_ms"}
	case name == "av_slow" && blocked:
		return []string{"heart.av_node.slow.theta_ms"}
	case name == "av_slow":
		return []string{"heart.av_node.slow.min_ms"}
	}
	for _, part := range [...]string{"right_bundle", "left_bundle", "left_anterior", "left_posterior", "left_septal"} {
		if strings.HasSuffix(name, part) && dir == event.Down && blocked {
			return []string{"heart.his_purkinje." + part + ".erp_ms"}
		}
	}
	return nil
}
