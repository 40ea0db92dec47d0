package ladder

import (
	"fmt"
	"testing"
)

// The P after a train that conducted up the fast pathway once had a VA time from the
// train's last stimulus, through the whole turn of re-entry.
func TestIntervalsStayWithinOnePassage(t *testing.T) {
	got := ""
	for _, d := range Build(read(t, "testdata/reentry.log"), Options{Form: Full}).Dims {
		switch d.Measure {
		case VA:
			got += fmt.Sprintf("VA %.0f ", d.T1.Sub(d.T0).MS())
		case PR:
			got += fmt.Sprintf("PR %.0f ", d.T1.Sub(d.T0).MS())
		case AH:
			got += fmt.Sprintf("AH %.0f ", d.T1.Sub(d.T0).MS())
		}
	}
	// VA 391-200 and 724-645; PR 645-350, AH 630-350.
	if want := "VA 191 PR 295 VA 79 AH 280 "; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}
