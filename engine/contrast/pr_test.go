package contrast

import "testing"

// "PR, longest 365 ms" of a re-entry in the node: the P that comes up has no PR.
func TestThePRsOfATachycardiaAreThoseOfBeatsFromAbove(t *testing.T) {
	s := preset(t, "avnrt-typical")
	for _, n := range gauge(s.Report, s) {
		if n.name == "PR, shortest" && (n.value == nil || *n.value < 155 || *n.value > 170) {
			t.Errorf("shortest PR %v, want 162", n.value)
		}
		if n.name == "PR, longest" && (n.value == nil || *n.value > 400 || *n.value < 385) {
			t.Errorf("longest PR %v, want 393 of the premature beat", n.value)
		}
		if n.name == "PR, mean" && (n.value == nil || *n.value > 250) {
			t.Errorf("mean PR %v, want that of four beats", n.value)
		}
	}
}
