package measure

import (
	"math"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Device is what the strip shows of a pacemaker. Percentages are null where nothing
// was counted.
type Device struct {
	// Mode is the mode at the beginning as its windows show it. A mode that the strip
	// does not tell from another, as VVT that has sensed nothing, gets the commoner
	// name, and rate modulation that never changed an interval no letter.
	Mode string `json:"mode"`

	AtrialPaced      *float64 `json:"atrial_paced_percent"`      // AP of AS + AP
	VentricularPaced *float64 `json:"ventricular_paced_percent"` // VP of VS + VP
	AS               int      `json:"as_count"`                  // signals the timing used
	AP               int      `json:"ap_count"`
	VS               int      `json:"vs_count"`
	VP               int      `json:"vp_count"`

	RefractoryA int `json:"atrial_refractory_count"` // signals in refractory periods
	RefractoryV int `json:"ventricular_refractory_count"`
	BlankedA    int `json:"atrial_blanked_count"`
	BlankedV    int `json:"ventricular_blanked_count"`
	Noise       int `json:"noise_count"`

	LostA int `json:"atrial_no_capture_count"`
	LostV int `json:"ventricular_no_capture_count"`

	Safety      int `json:"safety_stimulus_count"`
	ModeChanges int `json:"mode_change_count"`

	Longest     float64   `json:"longest_without_qrs_ms"` // between QRS complexes or to an end of the strip
	LongestFrom tick.Time `json:"longest_from_us"`

	// Synchronous is the share of QRS complexes with a P from above, sensed or not, at
	// most 300 ms before them (the limit of studies of leadless AV synchronous pacing,
	// Circulation 2024;150:439).
	Synchronous  *float64 `json:"av_synchronous_percent"`
	Fusion       int      `json:"fusion_count"`
	Pseudofusion int      `json:"pseudofusion_count"`

	// Conduction as the device's leads have it, median: from the signal of a P, tracked
	// or not, and from an atrial stimulus, to the signal of the QRS it led to. PR at the
	// surface is another interval.
	LeadPR *float64 `json:"lead_pr_ms"`
	LeadAR *float64 `json:"lead_ar_ms"`

	Intervals []Interval `json:"intervals"`
	Markers   []Marker   `json:"markers"` // in order of time
}

// Interval sums up one kind of interval between a device's beats: AP-VP, AS-VP,
// AP-VS, AS-VS, VP-AS, VS-AS, VP-AP, VS-AP, V-V and A-A.
type Interval struct {
	Name    string   `json:"name"`
	Count   int      `json:"count"`
	Median  *float64 `json:"median_ms"`
	Least   float64  `json:"least_ms"`
	Longest float64  `json:"longest_ms"`
}

// Marker is one stimulus or signal of the device.
type Marker struct {
	T        tick.Time `json:"t_us"`
	ID       event.ID  `json:"id"`
	Mark     string    `json:"mark"`               // AS, AP, VS, VP
	Use      string    `json:"use,omitempty"`      // of a signal
	Timer    string    `json:"timer,omitempty"`    // that ended, for a stimulus
	Captured *bool     `json:"captured,omitempty"` // of a stimulus
	Of       event.ID  `json:"wave"`               // first activation of the P or QRS sensed or made, 0: none
	AA       *float64  `json:"aa_ms"`              // since the last atrial beat of the device
	VV       *float64  `json:"vv_ms"`
	AV       *float64  `json:"av_ms"` // of a ventricular beat: since the atrial beat of its cycle
	VA       *float64  `json:"va_ms"` // of an atrial beat: since the ventricular beat before it
}

// synchrony is the longest PR that counts as synchronous.
const synchrony = 300 * tick.Millisecond

func percent(n, of int) *float64 {
	if of == 0 {
		return nil
	}
	p := math.Round(1000*float64(n)/float64(of)) / 10
	return &p
}

// device sums up the markers; nil without a device.
func (s *strip) deviceReport() *Device {
	d := s.dev
	if d == nil {
		return nil
	}
	r := &Device{Mode: d.mode(), ModeChanges: len(d.changes), Intervals: []Interval{}, Markers: []Marker{}}
	for i := range d.markers {
		r.count(&d.markers[i])
	}
	r.AtrialPaced, r.VentricularPaced = percent(r.AP, r.AS+r.AP), percent(r.VP, r.VS+r.VP)
	s.longest(r)
	s.synchronous(r)
	for j := range s.v {
		if s.v[j].fusion && d.vp[j] >= 0 {
			r.Fusion++
		}
	}
	r.Pseudofusion = len(s.pseudofusions())
	s.intervals(r)
	s.conducted(r)
	return r
}

func (r *Device) count(m *marker) {
	e := m.e
	if m.paced() {
		lost := &r.LostV
		if e.Channel == 'A' {
			lost = &r.LostA
		}
		if !e.Captured {
			*lost++
		}
		if e.Field == "safety" {
			r.Safety++
		}
	}
	a := e.Channel == 'A'
	switch {
	case m.paced() && m.beat && a:
		r.AP++
	case m.paced() && m.beat:
		r.VP++
	case m.beat && a:
		r.AS++
	case m.beat:
		r.VS++
	case m.paced():
	case e.Use == event.Noise:
		r.Noise++
	case e.Use == event.Refractory && a:
		r.RefractoryA++
	case e.Use == event.Refractory:
		r.RefractoryV++
	case e.Use == event.Blanked && a:
		r.BlankedA++
	case e.Use == event.Blanked:
		r.BlankedV++
	}
}

func (s *strip) longest(r *Device) {
	last := tick.Time(0)
	look := func(t tick.Time) {
		if d := t.Sub(last).MS(); d > r.Longest {
			r.Longest, r.LongestFrom = d, last
		}
		last = t
	}
	for j := range s.v {
		look(s.v[j].t)
	}
	look(s.log.Span)
}

func (s *strip) synchronous(r *Device) { r.Synchronous = percent(s.synchronousCount(), len(s.v)) }

// synchronousCount counts QRS complexes as Device.Synchronous does.
func (s *strip) synchronousCount() int {
	n, i := 0, 0
	for j := range s.v {
		for i < len(s.p) && s.p[i].t <= s.v[j].t {
			i++
		}
		k := i - 1
		for k >= 0 && s.p[k].retrograde {
			k--
		}
		if k >= 0 && s.v[j].t.Sub(s.p[k].t) <= synchrony && (j == 0 || s.p[k].t > s.v[j-1].t) {
			n++
		}
	}
	return n
}

// conducted measures conduction between the leads.
func (s *strip) conducted(r *Device) {
	var pr, ar []float64
	for i := range s.p {
		a, to := s.dev.at(s.dev.as[i]), s.p[i].to
		paced := false
		if k := s.dev.ap[i]; k >= 0 {
			a, paced = s.dev.at(k), true
		}
		if a == nil || to < 0 || !s.descending(i) {
			continue
		}
		switch q := s.dev.at(s.dev.vs[to]); {
		case q == nil || !q.beat || s.dev.vp[to] >= 0 || q.e.T <= a.e.T:
		case paced:
			ar = append(ar, q.e.T.Sub(a.e.T).MS())
		default:
			pr = append(pr, q.e.T.Sub(a.e.T).MS())
		}
	}
	r.LeadPR, r.LeadAR = median(pr), median(ar)
}

// intervalNames in the order of the report.
var intervalNames = []string{"AP-VP", "AS-VP", "AP-VS", "AS-VS", "VP-AS", "VS-AS", "VP-AP", "VS-AP", "V-V", "A-A"}

func (s *strip) intervals(r *Device) {
	all := make([][]float64, len(intervalNames))
	put := func(name string, d tick.Dur) *float64 {
		for k, n := range intervalNames {
			if n == name {
				all[k] = append(all[k], d.MS())
			}
		}
		return ms(d)
	}
	var a, v *marker // of the present cycle
	for i := range s.dev.markers {
		m := &s.dev.markers[i]
		out := s.marker(m)
		if before := s.dev.at(m.prev); m.beat && before != nil {
			d := m.e.T.Sub(before.e.T)
			if m.e.Channel == 'A' {
				out.AA = put("A-A", d)
			} else {
				out.VV = put("V-V", d)
			}
		}
		switch {
		case !m.beat:
		case m.e.Channel == 'V':
			if a != nil {
				out.AV = put(a.name()+"-"+m.name(), m.e.T.Sub(a.e.T))
			}
			a, v = nil, m
		default:
			if v != nil {
				out.VA = put(v.name()+"-"+m.name(), m.e.T.Sub(v.e.T))
			}
			a, v = m, nil
		}
		r.Markers = append(r.Markers, out)
	}
	for k, name := range intervalNames {
		if len(all[k]) == 0 {
			continue
		}
		in := Interval{Name: name, Count: len(all[k]), Median: median(all[k])} // sorts
		in.Least, in.Longest = all[k][0], all[k][len(all[k])-1]
		r.Intervals = append(r.Intervals, in)
	}
}

func (s *strip) marker(m *marker) Marker {
	out := Marker{T: m.e.T, ID: m.e.ID, Mark: m.name()}
	if m.paced() {
		captured := m.e.Captured
		out.Timer, out.Captured = m.e.Field, &captured
	} else {
		out.Use = m.e.Use.String()
	}
	switch {
	case m.wave < 0:
	case m.e.Channel == 'A':
		out.Of = s.p[m.wave].id
	default:
		out.Of = s.v[m.wave].id
	}
	return out
}

// mode is the mode at the beginning of the strip: as the first change names it, else
// as the windows show it. Of three letters, a mode is known by what it waits for: an atrial escape
// interval is for two chambers, an upper-rate interval for tracking, a refractory
// period for sensing.
func (d *device) mode() string {
	switch {
	case len(d.changes) > 0 && d.changes[0].T == 0:
		return d.changes[0].To
	case len(d.changes) > 0:
		return d.changes[0].Field
	}
	base := d.base()
	rate, sites := "", ""
	for _, w := range d.windows {
		if w.Why == "sensor" {
			rate = "R"
		}
	}
	for i := range d.markers {
		if d.markers[i].e.Field == "offset" {
			rate, sites = max(rate, "O"), "V"
		}
	}
	if base == "" {
		return ""
	}
	return base + rate + sites
}

// base is the mode's first three letters as the windows show them.
func (d *device) base() string {
	has := map[string]bool{} // looked up only
	for _, w := range d.windows {
		has[w.Field] = true
	}
	triggers := false
	for i := range d.markers {
		e := d.markers[i].e
		triggers = triggers || e.Kind == event.Sense && e.Use == event.Triggers
		has[string(e.Channel)+" paced"] = has[string(e.Channel)+" paced"] || e.Kind == event.Stimulus
	}
	senseA := has["pvarp"] || has["atrial_refractory"] || has["pvab"]
	senseV := has["ventricular_refractory"]
	switch {
	case has["backup_delay"] || has["atrial_refractory"] && senseV:
		return "DDD"
	case has["atrial_escape"] && has["upper_rate"]:
		return "DDD"
	case has["atrial_escape"] && senseA:
		return "DDI"
	case has["atrial_escape"] && senseV:
		return "DVI"
	case has["atrial_escape"]:
		return "DOO"
	case has["lower_rate"] && has["upper_rate"]:
		return "VDD"
	case has["lower_rate"] && senseV && triggers:
		return "VVT"
	case has["lower_rate"] && senseV:
		return "VVI"
	case has["lower_rate"] && has["atrial_refractory"] && triggers:
		return "AAT"
	case has["lower_rate"] && has["atrial_refractory"]:
		return "AAI"
	case has["lower_rate"] && has["A paced"]:
		return "AOO"
	case has["lower_rate"] && has["V paced"]:
		return "VOO"
	}
	return ""
}
