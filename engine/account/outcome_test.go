package account

import (
	"strings"
	"testing"

	"escapement/engine/event"
)

// What set an interval and how capture went are two things: a sentence once gave the
// captured tissue as the reason for the interval.
func TestWhichTissueWasCapturedIsNoReasonForTheInterval(t *testing.T) {
	const heart = `"span_ms":3000,"heart":{"sinus":{"rate_bpm":40,"first_ms":50000},"av_node":{"fast":{"ah_ms":null,"va_ms":null}}},`
	for _, c := range []struct{ name, plan, want string }{
		{"muscle only", heart + `"pacemaker":{"mode":"VVI","leads":{"ventricular":{"site":"his","rheobase_v":2,"muscle_rheobase_v":0.5}}}`, "It captured only the muscle of the two tissues under the tip."},
		{"below threshold", heart + `"pacemaker":{"mode":"VVI","leads":{"ventricular":{"amplitude_v":0.3}}}`, "was excitable: the output was below the threshold."},
		{"overtaken", heart + `"pacemaker":{"mode":"VVI","leads":{"ventricular":{"latency_ms":60}}},"interventions":[{"at_ms":1030,"do":"stimulate","site":"rv_apex"}]`, "before it took effect."},
	} {
		t.Run(c.name, func(t *testing.T) {
			l := run(t, c.plan)
			for i := range l.Events {
				if e := &l.Events[i]; e.Kind == event.Stimulus && e.Rule == event.Timed {
					said := strings.Join(Of(l, e.ID).Sentences, " ")
					if !strings.Contains(said, c.want) || strings.Contains(said, "interval was set by") {
						t.Errorf("got  %s\nwant %s", said, c.want)
					}
					return
				}
			}
			t.Fatal("no stimulus")
		})
	}
}
