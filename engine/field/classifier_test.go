package field

import (
	"encoding/json"
	"math"
	"os"
	"slices"
	"testing"

	"escapement/engine/lead"
)

// The classifier is a nearest centroid over ten features of the QRS, made from
// recordings of people (LUDB 1.0.1, ODC-BY); its formulas are those of the
// file's own description.
const classifierFile = "../../../shared/data/ludb-classifier.json"

type classifier struct {
	Classes  []string                      `json:"classes"`
	Features []string                      `json:"features"`
	Scale    map[string]float64            `json:"scale"`
	Centroid map[string]map[string]float64 `json:"centroid"`
}

func (c *classifier) name(x map[string]float64) string {
	best, found := math.Inf(1), ""
	for _, class := range c.Classes {
		d := 0.0
		for _, f := range c.Features {
			d += math.Pow((x[f]-c.Centroid[class][f])/c.Scale[f], 2)
		}
		if d < best {
			best, found = d, class
		}
	}
	return found
}

func features(c *lead.Complex) map[string]float64 {
	q := func(l lead.Name) []float64 {
		rest := slices.Sorted(slices.Values(c.MV[l][c.On-20 : c.On]))
		var out []float64
		for _, v := range c.MV[l][c.On : c.Off+1] {
			out = append(out, float64(v-(rest[9]+rest[10])/2))
		}
		return out
	}
	area := func(y []float64) (sum float64) {
		for _, v := range y {
			sum += v
		}
		return sum
	}
	size := func(y []float64) (sum float64) {
		for _, v := range y {
			sum += math.Abs(v)
		}
		return sum
	}
	one, foot, v1, v6 := q(lead.I), q(lead.AVF), q(lead.V1), q(lead.V6)
	third := len(one) / 3
	term := func(y []float64) float64 { return area(y[len(y)-third:]) / size(y) }
	sin, cos := math.Sincos(math.Atan2(2/math.Sqrt(3)*area(foot), area(one)))
	centre := 0.0
	for i, v := range v6 {
		centre += float64(i) * math.Abs(v)
	}
	return map[string]float64{
		"qrs_ms": float64(c.Off - c.On), "ax_cos": cos, "ax_sin": sin,
		"net_V1": area(v1) / size(v1), "net_V6": area(v6) / size(v6), "init_V6": area(v6[:third]) / size(v6),
		"term_V1": term(v1), "term_I": term(one), "term_V6": term(v6), "cen_V6": centre / size(v6),
	}
}

func TestRecordedHeartsClassifierKnowsTheBeats(t *testing.T) {
	data, err := os.ReadFile(classifierFile)
	if err != nil {
		t.Skip("the classifier made from recordings is not here")
	}
	var c classifier
	if err := json.Unmarshal(data, &c); err != nil {
		t.Fatal(err)
	}
	set := modelSet()
	for _, k := range []struct{ condition, want string }{
		{"normal", "NORMAL"}, {"LBBB", "LBBB"}, {"RBBB", "RBBB"}, {"LAFB", "LAFB"},
	} {
		if got := c.name(features(set.Complex(k.condition))); got != k.want {
			t.Errorf("%s is taken for %s, want %s", k.condition, got, k.want)
		}
	}
	for _, condition := range []string{"LPFB", "RBBB and LAFB", "RV apex paced", "LV lateral beat", "biventricular paced"} {
		t.Logf("%s is taken for %s", condition, c.name(features(set.Complex(condition))))
	}
}
