package session

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"
)

func callTable(t *testing.T, plan, read string) tabled {
	t.Helper()
	in, err := json.Marshal(map[string]any{"plan": json.RawMessage(plan), "read": read})
	if err != nil {
		t.Fatal(err)
	}
	reply, _ := New().Call("table", in)
	var out tabled
	if err := json.Unmarshal(reply, &out); err != nil {
		t.Fatal(err)
	}
	return out
}

func TestTableOfTheDeviceGoesRound(t *testing.T) {
	const with = `{"format":"escapement-plan/1","pacemaker":{"mode":"VVI","lower_rate_bpm":70}}`
	written := callTable(t, with, "")
	if written.Fault != "" || !strings.Contains(written.Table, "730880,pacemaker.lower_rate_bpm,70,/min") {
		t.Fatalf("%+v", written)
	}
	read := callTable(t, `{"format":"escapement-plan/1"}`, written.Table)
	if read.Fault != "" || !strings.Contains(string(read.Plan), `"VVI"`) || !slices.Contains(read.Missing, "pacemaker.pvarp_ms") {
		t.Errorf("%+v", read)
	}
	if bad := callTable(t, with, "mode,VVI\n"); !strings.Contains(bad.Fault, "line 1") {
		t.Errorf("a bad table: %+v", bad)
	}
}
