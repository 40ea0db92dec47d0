package sim

import (
	"fmt"
	"testing"

	"escapement/engine/event"
	"escapement/engine/plan"
)

func TestSmoke(t *testing.T) {
	p, err := plan.Decode([]byte(`{"format":"escapement-plan/1","span_ms":2500,"interventions":[{"at_ms":1900,"do":"stimulate","site":"rv_apex"}]}`))
	if err != nil {
		t.Fatal(err)
	}
	l, err := Run(p)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range event.Validate(l) {
		t.Error(e)
	}
	fmt.Print(l.Text())
}
