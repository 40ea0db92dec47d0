package measure

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// Overdrive is a ventricular train during a tachycardia and what came after it,
// read off the log as in the laboratory. Intervals are milliseconds, null where they
// could not be measured.
//
//   - TCL: the median of the last four cycles before the train.
//   - PPI: from the last stimulus to the next depolarisation of the paced site.
//   - VA: during the tachycardia, first ventricular activation to right atrium.
//   - SA: last stimulus to the right atrium that it captured.
//   - Corrected: PPI - TCL less what AH was longer on the return beat.
type Overdrive struct {
	FromUS    tick.Time  `json:"from_us"`
	LastUS    tick.Time  `json:"last_us"`
	Site      string     `json:"site"`
	CycleMS   float64    `json:"cycle_ms"`
	TCL       *float64   `json:"tcl_ms"`
	PPI       *float64   `json:"ppi_ms"`
	VA        *float64   `json:"va_ms"`
	SA        *float64   `json:"sa_ms"`
	PPITCL    *float64   `json:"ppi_minus_tcl_ms"`
	SAVA      *float64   `json:"sa_minus_va_ms"`
	Corrected *float64   `json:"corrected_ppi_minus_tcl_ms"`
	Entrained bool       `json:"entrained"` // the atria followed the train, and the tachycardia went on
	Response  string     `json:"response"`  // V-A-V, V-A-A-V, "ended" or empty
	Evidence  []event.ID `json:"evidence"`
}

// Published limits, ms. Ventricular trains 10 to 40 ms faster than the tachycardia:
// PPI - TCL over 115 and SA - VA over 85 in all 30 atypical re-entries in the AV node,
// in none of 44 orthodromic ones over a septal pathway (Michaud et al., JACC
// 2001;38:1163). Corrected, under 110 for orthodromic ones (Gonzalez-Torrecilla et
// al. 2006).
const (
	limitPPITCL = 115
	limitSAVA   = 85
)

// fewestStimuli of a train that may entrain (a choice of this package).
const fewestStimuli = 5

// overdrives finds the trains of stimuli in the ventricles that began during a
// regular tachycardia.
func (s *strip) overdrives() []Overdrive {
	out := []Overdrive{}
	var row []*event.Event
	flush := func() {
		if len(row) >= fewestStimuli {
			if o, ok := s.overdrive(row); ok {
				out = append(out, o)
			}
		}
		row = nil
	}
	for k := range s.log.Events {
		e := &s.log.Events[k]
		if e.Kind != event.Stimulus || e.Rule != event.Train || s.log.Sites[e.Site].Chamber() != 'V' {
			continue
		}
		if n := len(row); n > 0 && (row[0].Site != e.Site || n > 1 && !near(e.T.Sub(row[n-1].T), row[1].T.Sub(row[0].T))) {
			flush()
		}
		row = append(row, e)
	}
	flush()
	return out
}

func near(a, b tick.Dur) bool { return abs(float64(a-b)) < float64(2*tick.Millisecond) }

// tachycardia is the cycle of the last four regular beats before v, under 600 ms.
func (s *strip) tachycardia(before int) (tick.Dur, bool) {
	if before < 5 {
		return 0, false
	}
	var d []tick.Dur
	for j := before - 4; j < before; j++ {
		d = append(d, s.rr(j))
	}
	m := medianDur(d)
	for _, x := range d {
		if x-m > 20*tick.Millisecond || m-x > 20*tick.Millisecond {
			return 0, false
		}
	}
	return m, m < 600*tick.Millisecond
}

func (s *strip) overdrive(row []*event.Event) (Overdrive, bool) {
	first, last := row[0], row[len(row)-1]
	j := 0
	for j < len(s.v) && s.v[j].t < first.T {
		j++
	}
	tcl, ok := s.tachycardia(j)
	if !ok {
		return Overdrive{}, false
	}
	cycle := row[1].T.Sub(row[0].T)
	o := Overdrive{FromUS: first.T, LastUS: last.T, Site: s.log.Sites[last.Site].Name, CycleMS: cycle.MS(), TCL: ms(tcl), Evidence: []event.ID{first.ID, last.ID}}
	o.VA = s.lastVA(first.T)
	i := s.captured(last)
	if i >= 0 {
		o.SA = ms(s.log.At(s.p[i].ra).T.Sub(last.T))
		o.Evidence = append(o.Evidence, s.p[i].ra)
		o.Entrained = i > 1 && near(s.pp(i), cycle) && near(s.pp(i-1), cycle)
	}
	if next := s.next(last); next != nil {
		o.PPI = ms(next.T.Sub(last.T))
		o.Evidence = append(o.Evidence, next.ID)
	}
	s.respond(&o, i, last, tcl)
	if !o.Entrained {
		return o, true
	}
	o.PPITCL, o.SAVA = less(o.PPI, o.TCL), less(o.SA, o.VA)
	if a, b := s.ah(i), s.ah(s.pBefore(first.T)); a != nil && b != nil && o.PPITCL != nil {
		o.Corrected = less(o.PPITCL, less(a, b))
	}
	return o, true
}

func less(a, b *float64) *float64 {
	if a == nil || b == nil {
		return nil
	}
	return median([]float64{*a - *b})
}

// pBefore is the last P that had reached its His activation before t, or -1.
func (s *strip) pBefore(t tick.Time) int {
	for i := len(s.p) - 1; i >= 0; i-- {
		if h := s.log.At(s.p[i].his); h != nil && h.T < t {
			return i
		}
	}
	return -1
}

func (s *strip) ah(i int) *float64 {
	if i < 0 {
		return nil
	}
	return s.since(s.p[i].septum, s.p[i].his)
}

// lastVA is VA of the last tachycardia beat that ended before t.
func (s *strip) lastVA(t tick.Time) *float64 {
	for i := len(s.p) - 1; i >= 0; i-- {
		if w := &s.p[i]; w.retrograde && w.ra != 0 && s.log.At(w.ra).T < t {
			return s.va(i)
		}
	}
	return nil
}

// captured is the P that a stimulus led to, or -1.
func (s *strip) captured(stimulus *event.Event) int {
	for i := range s.p {
		if w := &s.p[i]; w.ra != 0 && w.retrograde && !w.echo && s.mark[w.id].origin == stimulus.ID && w.from >= 0 && s.own(int(w.from)) {
			return i
		}
	}
	return -1
}

// next is the depolarisation of the stimulated site after the one by the stimulus.
func (s *strip) next(stimulus *event.Event) *event.Event {
	for k := int(stimulus.ID); k < len(s.log.Events); k++ {
		e := &s.log.Events[k]
		if e.Kind == event.Activate && e.Site == stimulus.Site && !(e.Rule == event.Captured && e.Cause == stimulus.ID) {
			return e
		}
	}
	return nil
}

// respond says what followed the last atrial wave of the train, and whether the
// tachycardia went on.
func (s *strip) respond(o *Overdrive, i int, last *event.Event, tcl tick.Dur) {
	j := 0
	for j < len(s.v) && s.v[j].t <= last.T {
		j++
	}
	if j+2 >= len(s.v) || s.rr(j+2)-tcl > 20*tick.Millisecond || tcl-s.rr(j+2) > 20*tick.Millisecond {
		o.Response, o.Entrained = "ended", false
		return
	}
	if i < 0 {
		o.Entrained = false
		return
	}
	o.Response = "V-A-V"
	if i+1 < len(s.p) && s.p[i+1].t < s.v[j].t {
		o.Response = "V-A-A-V"
	}
}

// ventricularOverdrive says what the trains tell of the circuit.
func (f *finder) ventricularOverdrive() {
	for k := range f.report.Overdrive {
		o := &f.report.Overdrive[k]
		x := Finding{Slug: "ventricular_overdrive", Evidence: o.Evidence}
		head := fmt.Sprintf("Ventricular train at %.0f ms during a tachycardia of %.0f ms: ", o.CycleMS, *o.TCL)
		switch {
		case o.Response == "ended":
			x.Text = head + "the tachycardia did not go on after it. Consistent with a circuit that the ventricles can reach; the intervals after the train tell nothing."
			x.clause = "ended by a ventricular train"
		case !o.Entrained || o.PPITCL == nil || o.SAVA == nil:
			x.Text = head + "the atria did not follow it. The intervals after the train tell nothing."
		default:
			x.Text = head + fmt.Sprintf("the atria follow, response %s, PPI %.0f, PPI - TCL %.0f, SA - VA %.0f ms", o.Response, *o.PPI, *o.PPITCL, *o.SAVA)
			if o.Corrected != nil {
				x.Text += fmt.Sprintf(", PPI - TCL corrected for AH %.0f ms", *o.Corrected)
			}
			means, rivals := o.means()
			x.Text += ": consistent with " + means + "."
			x.Rivals, x.clause = rivals, fmt.Sprintf("ventricular train at %.0f ms (PPI - TCL %.0f ms, SA - VA %.0f ms)", o.CycleMS, *o.PPITCL, *o.SAVA)
			x.Note = "Limits 115 and 85 ms: Michaud et al., JACC 2001;38:1163, trains 10 to 40 ms faster than the tachycardia; atypical AV-nodal re-entry against septal pathways. A pathway far from the paced site lengthens PPI as the node does."
		}
		f.add(orderTachycardia, x)
	}
}

func (o *Overdrive) means() (string, []string) {
	const node, pathway = "re-entry in the AV node", "orthodromic re-entry"
	switch {
	case o.Response == "V-A-A-V":
		return "atrial tachycardia", []string{"re-entry in the AV node with a long HV"}
	case *o.PPITCL > limitPPITCL && *o.SAVA > limitSAVA:
		return node + ": the paced site is far from the circuit", []string{pathway + " over a pathway far from the paced site"}
	case *o.PPITCL <= limitPPITCL && *o.SAVA <= limitSAVA:
		return pathway + ": the paced site is near the circuit", nil
	}
	return "either circuit: one of the two numbers lies on each side of its limit", []string{node, pathway}
}
