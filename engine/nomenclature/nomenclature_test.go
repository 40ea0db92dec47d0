package nomenclature

import (
	"bytes"
	"slices"
	"strings"
	"testing"

	"escapement/engine/plan"
)

func decode(t *testing.T, text string) *plan.Plan {
	t.Helper()
	p, err := plan.Decode([]byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

const device = `{"format":"escapement-plan/1","pacemaker":{"mode":"DDD","lower_rate_bpm":55,"sensed_av_ms":120,"safety_stimulus":false,"leads":{"left":{"amplitude_v":3.5}}}}`

// The codes are those of public lists of IEEE 11073-10103 terms (a concept list, the
// CardX-CIED and MII guides); 729987 is the left ventricular amplitude.
func TestTableHasTheCodesOfTheStandard(t *testing.T) {
	var b bytes.Buffer
	if err := Write(&b, decode(t, device)); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"MDC_IDC_SET_BRADY_MODE,730752,pacemaker.mode,DDD (754760),\n",
		"MDC_IDC_SET_BRADY_LOWRATE,730880,pacemaker.lower_rate_bpm,55,/min\n",
		"MDC_IDC_SET_LEADCHNL_LV_PACING_AMPLITUDE,729987,pacemaker.leads.left.amplitude_v,3.5,V\n",
		"MDC_IDC_SET_BRADY_MAX_TRACKING_RATE,731136,pacemaker.max_tracking_rate_bpm,not stated,/min\n",
		",,pacemaker.pvarp_ms,not stated,ms\n",
		",,pacemaker.safety_stimulus,false,\n",
	} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the table lacks %q", want)
		}
	}
}

func TestTableRoundTrip(t *testing.T) {
	p := decode(t, device)
	var b bytes.Buffer
	if err := Write(&b, p); err != nil {
		t.Fatal(err)
	}
	q := plan.Default()
	missing, unknown, err := Read(&b, q)
	if err != nil || len(unknown) > 0 {
		t.Fatalf("%v, not known: %v", err, unknown)
	}
	if got, want := string(q.Encode()), string(decode(t, device).Encode()); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if !slices.Contains(missing, "pacemaker.pvarp_ms") || slices.Contains(missing, "pacemaker.mode") {
		t.Errorf("not stated: %v", missing)
	}
}

// What a report does not state is not filled in: PVARP has no value in the plan.
func TestWhatIsNotStatedStaysSo(t *testing.T) {
	p := plan.Default()
	table := "reference_id,code,field,value,unit\n,730752,,754773,\nMDC_IDC_SET_BRADY_LOWRATE,,,70,/min\nMDC_IDC_SET_BRADY_NIGHT_RATE,,,50,/min\n"
	missing, unknown, err := Read(strings.NewReader(table), p)
	if err != nil {
		t.Fatal(err)
	}
	if v, ok := p.Stated("pacemaker.mode"); v != "VVI" || !ok {
		t.Errorf("mode %q", v)
	}
	if v, ok := p.Stated("pacemaker.pvarp_ms"); ok {
		t.Errorf("PVARP was made up: %q", v)
	}
	if !slices.Contains(missing, "pacemaker.pvarp_ms") || len(unknown) != 1 || unknown[0] != "MDC_IDC_SET_BRADY_NIGHT_RATE" {
		t.Errorf("missing %v, unknown %v", missing, unknown)
	}
}

func TestBadTablesNameTheLine(t *testing.T) {
	const h = "reference_id,code,field,value,unit\n"
	for _, c := range []struct{ name, table, want string }{
		{"no head", "mode,DDD\n", "line 1"},
		{"out of range", h + ",730880,,9999,/min\n", "line 2: pacemaker.lower_rate_bpm: \"9999\"; allowed: a number from 30 to 180 /min"},
		{"another unit", h + ",730880,,1000,ms\n", "line 2: pacemaker.lower_rate_bpm in \"ms\""},
		{"twice", h + ",730880,,60,/min\n,730880,,70,/min\n", "line 3: pacemaker.lower_rate_bpm stands there twice"},
		{"two meanings", h + "MDC_IDC_SET_BRADY_MODE,730880,,60,/min\n", "line 2: \"730880\" is pacemaker.lower_rate_bpm, but pacemaker.mode was named before it"},
		{"mode", h + ",730752,,DXD,\n", "line 2: pacemaker.mode"},
		{"columns", h + "a,b\n", "line 2: 2 columns"},
	} {
		if _, _, err := Read(strings.NewReader(c.table), plan.Default()); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: got %v, want %s", c.name, err, c.want)
		}
	}
}

// FuzzRead: any table fails with an error or is read; nothing panics.
func FuzzRead(f *testing.F) {
	var b bytes.Buffer
	if err := Write(&b, plan.Default()); err != nil {
		f.Fatal(err)
	}
	f.Add(b.String())
	f.Fuzz(func(t *testing.T, table string) {
		p := plan.Default()
		if _, _, err := Read(strings.NewReader(table), p); err == nil {
			if _, err := plan.Decode(p.Encode()); err != nil {
				t.Fatal(err)
			}
		}
	})
}
