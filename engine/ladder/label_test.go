package ladder

import (
	"slices"
	"testing"

	"escapement/engine/sim/simtest"
	"escapement/presets"
)

// A block in an accessory pathway was labelled AP, as an atrial stimulus is.
func TestNoBlockIsLabelledAsADevicesMarker(t *testing.T) {
	for _, e := range presets.List() {
		d := Build(simtest.Preset(t, e.Name).Log, Options{Form: Plain})
		for _, m := range d.Marks {
			if slices.Contains([]string{"AP", "AS", "AR", "VP", "VS", "VR"}, m.Label) {
				t.Fatalf("%s: a mark is labelled %q", e.Name, m.Label)
			}
		}
	}
}
