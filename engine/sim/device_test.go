package sim

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// mark is what a device's record shows: a stimulus or a signal with its use.
type mark struct {
	ms   float64
	what string // "AP", "VP", "AP lost" where it did not capture, "AS tracked", "VS inhibits"
	e    *event.Event
}

// withDevice runs a heart with a device, both given as JSON. Every log is validated.
func withDevice(t testing.TB, spanMS float64, heart, device string, interventions ...string) strip {
	t.Helper()
	l, err := Play(program(t, spanMS, heart, device, interventions...))
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range event.Validate(l) {
		t.Error(e)
	}
	inner, _ := t.(*testing.T)
	return strip{l, inner}
}

func program(t testing.TB, spanMS float64, heart, device string, interventions ...string) *plan.Program {
	t.Helper()
	p, err := plan.Decode(fmt.Appendf(nil, `{"format":"escapement-plan/1","span_ms":%g,"heart":{%s},"pacemaker":{%s},"interventions":[%s]}`,
		spanMS, heart, device, strings.Join(interventions, ",")))
	if err != nil {
		t.Fatal(err)
	}
	prog, err := p.Compile()
	if err != nil {
		t.Fatal(err)
	}
	return prog
}

// marks are the stimuli of the device and the signals it sensed from a time on.
func marks(l *event.Log, fromMS float64) []mark {
	var out []mark
	for i := range l.Events {
		e := &l.Events[i]
		m := mark{ms: e.T.MS(), e: e}
		switch {
		case m.ms < fromMS:
			continue
		case e.Kind == event.Sense:
			m.what = string(e.Channel) + "S " + e.Use.String()
		case e.Kind == event.Stimulus && e.Rule == event.Timed && e.Field != "offset":
			m.what = string(e.Channel) + "P"
			if !e.Captured {
				m.what += " lost"
			}
		default:
			continue
		}
		out = append(out, m)
	}
	return out
}

// shows compares the record from a time on with "460 AS tracked, 610 VP", as far as
// that goes; times to 1 ms, rules exactly.
func (s strip) shows(fromMS float64, want string) {
	s.t.Helper()
	got := marks(s.Log, fromMS)
	var said []string
	for _, m := range got {
		said = append(said, strconv.FormatFloat(math.Round(10*m.ms)/10, 'f', -1, 64)+" "+m.what)
	}
	for i, w := range strings.Split(want, ", ") {
		at, what, _ := strings.Cut(w, " ")
		ms, err := strconv.ParseFloat(at, 64)
		if err != nil {
			s.t.Fatal(err)
		}
		if i >= len(got) || got[i].what != what || math.Abs(got[i].ms-ms) > exact {
			s.t.Errorf("record\n%s\nwant\n%s", strings.Join(said, ", "), want)
			return
		}
	}
}

// at are the times of marks that begin with a text: "VP", "AS refractory".
func (s strip) at(what string) []float64 {
	var out []float64
	for _, m := range marks(s.Log, 0) {
		if strings.HasPrefix(m.what, what) {
			out = append(out, m.ms)
		}
	}
	return out
}

// ventricular are the times of ventricular stimuli and of signals that the timing
// counts from.
func (s strip) ventricular() []float64 {
	var out []float64
	for _, m := range marks(s.Log, 0) {
		switch m.what {
		case "VP", "VP lost", "VS inhibits", "VS resets":
			out = append(out, m.ms)
		}
	}
	return out
}

// delays are the intervals from each mark of one kind to the next of another, where
// that comes before another of the first kind.
func (s strip) delays(from, to string) []float64 {
	var out []float64
	start := math.NaN()
	for _, m := range marks(s.Log, 0) {
		switch {
		case strings.HasPrefix(m.what, from):
			start = m.ms
		case strings.HasPrefix(m.what, to) && start == start:
			out = append(out, m.ms-start)
			start = math.NaN()
		}
	}
	return out
}

// count are how many events of a kind a log holds.
func (s strip) count(k event.Kind) int {
	n := 0
	for i := range s.Events {
		if s.Events[i].Kind == k {
			n++
		}
	}
	return n
}

// every tells whether all numbers are near one; there must be some.
func (s strip) every(name string, got []float64, want float64) {
	s.t.Helper()
	if len(got) == 0 {
		s.t.Errorf("%s: none", name)
	}
	for _, g := range got {
		near(s.t, name, g, want, exact)
	}
}

// sinusAt is a sinus node whose impulses reach the atrial lead at a time and then
// every cycle.
func sinusAt(firstMS, cycleMS float64) string {
	return fmt.Sprintf(`"sinus":{"rate_bpm":%.9g,"first_ms":%.9g}`, 60000/cycleMS, firstMS-60)
}

// still is a sinus node that gives no impulse.
const still = quiet

// noAV is a node that conducts neither way.
const noAV = `"av_node":{"fast":{"ah_ms":null,"va_ms":null}}`

// outside is the time that an impulse takes from the atrial lead to the lead in the
// right ventricular apex outside the AV node's pathway: 41.327 to the septum, 10 below
// the node, 29.536 in the right bundle at HV 45 and 52.032 over its endings.
const outside = 132.895

// conductsIn is a node without decrement that takes so long from the atrial lead to
// the ventricular one, and does not conduct back.
func conductsIn(arMS float64) string {
	return fmt.Sprintf(`"av_node":{"fast":{"min_ms":%.4f,"alpha_ms":0,"tau_ms":100,"theta_ms":200,"up":null,"concealed_up":0}}`, arMS-outside)
}

// conductsBack is complete block downwards in a node that conducts back in a constant
// VA time, from stimulus to atrial lead. Its recovery is one for both ways: the ERP
// less 80 ms, at a cycle of 600; what it blocks does not enter it.
func conductsBack(vaMS, erpMS float64) string {
	return fmt.Sprintf(`"av_node":{"fast":{"ah_ms":null,"erp_ms":%g,"va_ms":%.4f,"concealed_from":1}}`, erpMS, vaMS)
}

// A P that tips the mode switch is taken by the mode it switched to; the window that
// decided its use must be one that was there before it, not the escape begun anew.
func TestAPThatSwitchesTheModeNamesAnEarlierWindow(t *testing.T) {
	s := withDevice(t, 24000, `"atria":{"erp_ms":160},`+still+","+noAV,
		`"mode":"DDD","sensed_av_ms":107,"pvab_ms":105,"pvarp_ms":300,"max_tracking_rate_bpm":130,"mode_switch":{"rate_bpm":170}`, flutter)
	if s.count(event.Mode) == 0 {
		t.Fatal("no mode switch")
	}
	for _, m := range marks(s.Log, 0) {
		if m.e.Kind == event.Sense && m.e.By >= m.e.ID {
			t.Errorf("%v %s is decided by event %d, later than itself (%d)", m.ms, m.what, m.e.By, m.e.ID)
		}
	}
}

// A ventricular signal at the very instant at which the crosstalk window opens was
// recorded before that window, and named an event yet to come as its reason.
func TestASignalAsTheCrosstalkWindowOpensComesAfterIt(t *testing.T) {
	heart, device := `"sinus":{"rate_bpm":40}`, `"mode":"DDD","lower_rate_bpm":60,"pavb_ms":30`
	l, err := Play(program(t, 6000, heart, device))
	if err != nil {
		t.Fatal(err)
	}
	paced := tick.Time(0)
	for i := range l.Events {
		if e := &l.Events[i]; e.Kind == event.Stimulus && e.Channel == 'A' && e.T > 2500000 {
			paced = e.T
			break
		}
	}
	l, err = Play(program(t, 6000, heart, device, stimulus(paced.MS()+30, "rv_apex")))
	if err != nil {
		t.Fatal(err)
	}
	found := false
	for i := range l.Events {
		e := &l.Events[i]
		found = found || e.Kind == event.Sense && e.Use == event.Safety && e.By > 0
	}
	if !found {
		t.Error("no signal in the crosstalk window")
	}
	for _, err := range event.Validate(l) {
		t.Error(err)
	}
}
