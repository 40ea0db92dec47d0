package field

import (
	"testing"

	"escapement/engine/field/criteria"
	"escapement/engine/field/tissue"
)

// knownFailures are the published criteria that the model does not meet, and the
// values it reaches. The list is exact: a criterion that fails anew and one that
// passes although it stands here both fail the test. README tells users of these.
var knownFailures = map[string]string{
	"LAFB: q under half of R in aVL":                           "q/R 0.533",
	"LPFB: axis +90 to +180, net amplitude":                    "axis 83.5",
	"LPFB: rS in I":                                            "S-R -0.0866, r 0.321",
	"RBBB and LAFB: axis of the first 70 ms left and superior": "axis 94.8",
	"incomplete LBBB: QRS 110-119 ms, 15 ms late":              "QRS 89",
	"WPW left lateral: PR under 120 ms":                        "PR 123",
}

func modelSet() *criteria.Set {
	p := parts()
	return criteria.NewSet(p[0], p[1], criteria.Limits{Ventricles: tissue.VentricularLimits, Atria: tissue.AtrialLimits})
}

func TestPublishedCriteria(t *testing.T) {
	seen := map[string]bool{}
	for _, v := range modelSet().Verdicts() {
		if seen[v.Name()] {
			t.Errorf("two criteria are called %q", v.Name())
		}
		seen[v.Name()] = true
		want, known := knownFailures[v.Name()]
		switch got := v.Reached(); {
		case v.Passed() && known:
			t.Errorf("%s: passes with %s but stands among the known failures", v.Name(), got)
		case !v.Passed() && !known:
			t.Errorf("%s (%s): fails with %s", v.Name(), v.Source, got)
		case known && got != want:
			t.Errorf("%s: reaches %s, known to reach %s", v.Name(), got, want)
		}
	}
	for name := range knownFailures {
		if !seen[name] {
			t.Errorf("%s: among the known failures but no criterion", name)
		}
	}
	t.Logf("%d of %d criteria met", len(seen)-len(knownFailures), len(seen))
}
