package session

import (
	"encoding/json"
	"fmt"
	"reflect"
	"strings"
	"testing"
)

const sweptPlan = `{"format":"escapement-plan/1","span_ms":8000,"heart":{"av_node":{"fast":{"ah_ms":null,"va_ms":null}}},"pacemaker":{},
	"sweep":{"x":{"field":"heart.sinus.rate_bpm","values":[100,110,140,160]},"y":{"field":"heart.atria.erp_ms","values":[200,220]},"outcomes":["pattern","v_rate_bpm"]}}`

type sweptReply struct {
	OK        bool
	Diagnoses []struct{ Text string }
	Head      struct {
		Of int
		X  struct{ Values []float64 }
	}
	Slice *struct {
		Points  []int
		Columns []struct {
			Name   string
			Number []float64
			Words  struct {
				List []string
				At   []int
			}
		}
	}
}

func callSweep(t *testing.T, s *Session, plan, points string) sweptReply {
	t.Helper()
	b, _ := s.Call("sweep", []byte(fmt.Sprintf(`{"plan":%s,"points":%s}`, plan, points)))
	var r sweptReply
	if err := json.Unmarshal(b, &r); err != nil {
		t.Fatal(err)
	}
	return r
}

// The points of a grid may be run by several sessions in any order: each entry is the
// same as by one that runs them all.
func TestSlicesOfASweepAreThoseOfTheWhole(t *testing.T) {
	s := New()
	head := callSweep(t, s, sweptPlan, `null`)
	if !head.OK || head.Head.Of != 8 || head.Slice != nil || len(head.Head.X.Values) != 4 {
		t.Fatalf("%+v", head)
	}
	whole := callSweep(t, s, sweptPlan, `[0,1,2,3,4,5,6,7]`).Slice
	entry := func(r *sweptReply, i int) string {
		c := r.Slice.Columns
		return c[0].Words.List[c[0].Words.At[i]] + fmt.Sprint(c[1].Number[i])
	}
	for _, points := range []string{"[7,2,5]", "[4]", "[6,0]", "[3,1]"} {
		r := callSweep(t, New(), sweptPlan, points)
		for i, p := range r.Slice.Points {
			if got, want := entry(&r, i), entry(&sweptReply{Slice: whole}, p); got != want {
				t.Errorf("point %d in %s: %s, want %s", p, points, got, want)
			}
		}
	}
	// MTRI 500, TARP 400: 1:1 to 120, at 140 N = floor(28.6/71.4) + 2 = 2, 2:1 from 150
	// (Furman 1985, rule read; numbers derived).
	var got []string
	for _, at := range whole.Columns[0].Words.At {
		got = append(got, whole.Columns[0].Words.List[at])
	}
	if want := []string{"1:1", "1:1", "3:2", "2:1"}; !reflect.DeepEqual(got[:4], want) {
		t.Errorf("patterns %v, want %v", got[:4], want)
	}
}

func TestASweptPlanOpensOnItsPoint(t *testing.T) {
	s := New()
	b, _ := s.Call("sweep_plan", []byte(`{"plan":`+sweptPlan+`,"point":6,"seed":3}`))
	var r struct {
		OK   bool
		Plan struct {
			Seed  int
			Heart struct {
				Sinus struct {
					Rate float64 `json:"rate_bpm"`
				}
			}
			Sweep any
		}
	}
	if err := json.Unmarshal(b, &r); err != nil || !r.OK || r.Plan.Seed != 3 || r.Plan.Heart.Sinus.Rate != 140 || r.Plan.Sweep != nil {
		t.Errorf("%s (%v)", b, err)
	}
}

func TestASweepThatCannotBeIsDiagnosed(t *testing.T) {
	for _, c := range []struct{ name, plan, want string }{
		{"a plan without one", `{"format":"escapement-plan/1"}`, "sweep: nothing; allowed: an object with x"},
		{"a wrong one", `{"format":"escapement-plan/1","sweep":{"x":{"field":"a","values":[1]}}}`, `sweep.x.field: "a"; allowed`},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := callSweep(t, New(), c.plan, `[0]`)
			if r.OK || len(r.Diagnoses) != 1 || !strings.Contains(r.Diagnoses[0].Text, c.want) {
				t.Errorf("%+v, want %s", r, c.want)
			}
		})
	}
}
