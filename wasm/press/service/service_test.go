package service

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"net/http"
	"net/http/httptest"
	"net/url"
	"strings"
	"testing"

	"escapement/engine/scene"
	"escapement/presets"
	"escapement/wasm/live/session"
)

// ask sends one request; a body makes it a POST.
func ask(t *testing.T, path string, body string) *httptest.ResponseRecorder {
	t.Helper()
	method, in := "GET", io.Reader(nil)
	if body != "" {
		method, in = "POST", strings.NewReader(body)
	}
	w := httptest.NewRecorder()
	New().ServeHTTP(w, httptest.NewRequest(method, path, in))
	return w
}

type told struct {
	OK        bool `json:"ok"`
	Diagnoses []struct{ Path, Found, Allowed, Note, Text string }
	Fault     string
}

func refused(t *testing.T, w *httptest.ResponseRecorder) told {
	t.Helper()
	var got told
	if err := json.Unmarshal(w.Body.Bytes(), &got); err != nil || got.OK {
		t.Fatalf("%d %s: %v", w.Code, w.Body, err)
	}
	return got
}

// Every print in every format, from a preset: the status, the kind of file by its
// first bytes, a length that is true.
func TestEveryRouteAnswers(t *testing.T) {
	begins := map[string]string{"pdf": "%PDF", "png": "\x89PNG", "svg": "<svg", "edf": "0       ", "csv": "event", "json": "{"}
	for _, route := range Routes() {
		t.Run(route, func(t *testing.T) {
			w := ask(t, route+"?plan=dual-upper-rate-wenckebach&before=normal&dots_mm=3&to_ms=5000&date=2026-12-01&version=0.9", "")
			if w.Code != http.StatusOK {
				t.Fatalf("%d: %s", w.Code, w.Body)
			}
			_, format, _ := strings.Cut(route, ".")
			if !bytes.HasPrefix(w.Body.Bytes(), []byte(begins[format])) {
				t.Errorf("begins with %q", w.Body.Bytes()[:min(8, w.Body.Len())])
			}
			if got := w.Header().Get("Content-Length"); got != fmt.Sprint(w.Body.Len()) {
				t.Errorf("Content-Length %s of %d bytes", got, w.Body.Len())
			}
		})
	}
}

func TestRefusals(t *testing.T) {
	const good = `{"plan":"normal"`
	for _, c := range []struct {
		name, method, path, body string
		status                   int
		where, says              string
	}{
		{"no such print", "POST", "/press/poster.pdf", good + "}", 404, "", "/press/strip.pdf"},
		{"no such format", "GET", "/press/strip.doc?plan=normal", "", 404, "", "/press/strip.pdf"},
		{"outside", "GET", "/strip.pdf?plan=normal", "", 404, "", "/press/strip.pdf"},
		{"another method", "PUT", "/press/strip.pdf", good + "}", 405, "", "GET, POST"},
		{"not JSON", "POST", "/press/strip.pdf", "{", 400, "", "an object with a plan"},
		{"not an object", "POST", "/press/strip.pdf", "null", 400, "", "an object with a plan"},
		{"no plan", "POST", "/press/strip.pdf", "{}", 400, "plan", "a plan, or the name of a preset"},
		{"no such preset", "GET", "/press/strip.pdf?plan=norma", "", 400, "plan", "a plan, or the name of a preset"},
		{"a name that is not known", "POST", "/press/strip.pdf", good + `,"patient":"x"}`, 400, "patient", "speed_mm_s"},
		{"no such paper", "POST", "/press/strip.pdf", good + `,"paper":"a7"}`, 400, "paper", "-landscape"},
		{"speed out of range", "POST", "/press/strip.pdf", good + `,"speed_mm_s":0}`, 400, "speed_mm_s", "2.5 to 400"},
		{"speed of another kind", "GET", "/press/strip.pdf?plan=normal&speed_mm_s=fast", "", 400, "speed_mm_s", `"fast"`},
		{"gain left empty", "POST", "/press/strip.pdf", good + `,"gain_mm_mv":null}`, 400, "gain_mm_mv", "1 to 80"},
		{"no such lead", "GET", "/press/strip.pdf?plan=normal&leads=II,V9", "", 400, "leads", "V1 to V6"},
		{"not a date", "POST", "/press/strip.pdf", good + `,"date":"yesterday"}`, 400, "date", "2026-12-01"},
		{"a window backwards", "POST", "/press/strip.pdf", good + `,"from_ms":900,"to_ms":800}`, 400, "to_ms", "above from_ms"},
		{"a window off the strip", "POST", "/press/strip.pdf", good + `,"from_ms":9e7}`, 422, "from_ms, to_ms", "within the strip"},
		{"a page that is not there", "POST", "/press/strip.svg", good + `,"page":40}`, 422, "page", "1 to"},
		{"too many dots", "POST", "/press/strip.png", good + `,"paper":"roll","dots_mm":48}`, 422, "dots_mm", "million"},
		{"more leads than the paper is high", "POST", "/press/strip.pdf", good + `,"gain_mm_mv":40,"leads":["I","II","V1","V2","V3","V4","V5","V6"]}`, 422, "paper", "there are 210 mm"},
		{"a comparison with nothing", "POST", "/press/comparison.pdf", good + "}", 400, "before", "two plans"},
		{"a report on one long sheet", "POST", "/press/report.pdf", good + `,"paper":"roll"}`, 400, "paper", "a4"},
		{"a ladder without a ladder", "GET", "/press/ladder.pdf?plan=normal&ladder=none", "", 400, "ladder", "full, plain"},
		{"no such lane", "GET", "/press/strip.pdf?plan=normal&lanes=lead:II,egm:moon", "", 400, "lanes", "egm:HISd"},
		{"no lanes", "POST", "/press/strip.pdf", good + `,"lanes":[]}`, 400, "lanes", "lead:II"},
		{"no such form", "POST", "/press/strip.pdf", good + `,"paper_form":"4x3"}`, 400, "paper_form", "3x4"},
		{"electrograms of a strip that is too long", "POST", "/press/strip.pdf", `{"plan":{"format":"escapement-plan/1","span_ms":1200000},"lanes":["egm:HISd"]}`, 422, "plan", "print the ladder alone"},
		{"two plans in a query", "GET", "/press/ladder.pdf?plan=normal&plan=lbbb", "", 400, "plan", "2 values"},
		{"an unreadable query", "GET", "/press/ladder.pdf?plan=%zz", "", 400, "", "name=value"},
		{"too large", "POST", "/press/strip.pdf", strings.Repeat(" ", MaxBytes+1), 413, "", fmt.Sprint(MaxBytes)},
		{"leads of a strip that is too long", "POST", "/press/strip.pdf", `{"plan":{"format":"escapement-plan/1","span_ms":1200000}}`, 422, "plan", "print the ladder alone"},
	} {
		t.Run(c.name, func(t *testing.T) {
			w := httptest.NewRecorder()
			New().ServeHTTP(w, httptest.NewRequest(c.method, c.path, strings.NewReader(c.body)))
			if w.Code != c.status {
				t.Fatalf("%d, want %d: %s", w.Code, c.status, w.Body)
			}
			got := refused(t, w)
			if d := got.Diagnoses[0]; d.Path != c.where || !strings.Contains(d.Text, c.says) {
				t.Errorf("told %+v, want %q at %q", d, c.says, c.where)
			}
			if allow := w.Header().Get("Allow"); (allow != "") != (c.status == 405) {
				t.Errorf("Allow: %q", allow)
			}
		})
	}
}

// A request with a body whose length nobody told is bounded as well.
func TestABodyOfUnknownLengthIsBounded(t *testing.T) {
	r := httptest.NewRequest("POST", "/press/strip.pdf", io.MultiReader(strings.NewReader(strings.Repeat(" ", MaxBytes)), strings.NewReader("  ")))
	r.ContentLength = -1
	w := httptest.NewRecorder()
	New().ServeHTTP(w, r)
	if w.Code != http.StatusRequestEntityTooLarge {
		t.Errorf("%d", w.Code)
	}
}

// A bad plan is answered in the words in which the page hears of it.
func TestABadPlanIsToldAsThePageIsTold(t *testing.T) {
	const bad = `{"format":"escapement-plan/1","heart":{"av_node":{"fast":{"ah_ms":5000}},"sinus":{"rate_bpm":"ninety"},"sinuss":{}}}`
	w := ask(t, "/press/strip.pdf", `{"plan":`+bad+`}`)
	if w.Code != http.StatusUnprocessableEntity {
		t.Fatalf("%d: %s", w.Code, w.Body)
	}
	reply, _ := session.New().Call("compute", []byte(`{"plan":`+bad+`}`))
	var page struct {
		Diagnoses json.RawMessage `json:"diagnoses"`
	}
	if err := json.Unmarshal(reply, &page); err != nil {
		t.Fatal(err)
	}
	var press struct {
		Diagnoses json.RawMessage `json:"diagnoses"`
	}
	if err := json.Unmarshal(w.Body.Bytes(), &press); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(press.Diagnoses, page.Diagnoses) || len(press.Diagnoses) < 100 {
		t.Errorf("got  %s\nwant %s", press.Diagnoses, page.Diagnoses)
	}
}

// A query and a body that say the same give the same print, and it is the same again.
func TestAQueryAndABodyGiveTheSamePrint(t *testing.T) {
	file, _ := presets.Read("wenckebach-4-3")
	q := url.Values{"plan": {string(file)}, "leads": {"II,V1"}, "speed_mm_s": {"50"}, "ladder": {"plain"}, "device": {"false"}, "date": {"2026-12-01"}, "to_ms": {"2500"}}
	a := ask(t, "/press/strip.pdf?"+q.Encode(), "")
	body := fmt.Sprintf(`{"plan":%s,"leads":["II","V1"],"speed_mm_s":50,"ladder":"plain","device":false,"date":"2026-12-01","to_ms":2500}`, file)
	b := ask(t, "/press/strip.pdf", body)
	if a.Code != 200 || !bytes.Equal(a.Body.Bytes(), b.Body.Bytes()) {
		t.Errorf("query: %d, %d bytes; body: %d, %d bytes", a.Code, a.Body.Len(), b.Code, b.Body.Len())
	}
	if c := ask(t, "/press/strip.pdf", strings.Replace(body, "2026-12-01", "2026-12-02", 1)); bytes.Equal(b.Body.Bytes(), c.Body.Bytes()) {
		t.Error("the date is not on the print")
	}
}

// What the page shows is printed: the same lanes in the same order, the forms of paper
// too, whatever a plan has and has not.
func TestAPrintHasTheLanesOfThePage(t *testing.T) {
	for _, c := range []struct{ name, preset, lanes, form string }{
		{"usual", "dual-upper-rate-wenckebach", "lead:II lead:V1 axis ladder device", ""},
		{"another order", "dual-upper-rate-wenckebach", "device ladder lead:V1 axis lead:II", ""},
		{"device check", "dual-upper-rate-wenckebach", "lead:II egm:A egm:V axis ladder device", ""},
		{"laboratory", "lbbb", "lead:I egm:HRA egm:HISd egm:RVA axis ladder", ""},
		{"membrane", "wenckebach-4-3", "lead:II membrane:sinus membrane:av_junction axis", ""},
		{"what the plan has not", "normal", "lead:II egm:V axis device", ""},
		{"signals alone", "normal", "egm:HISd", ""},
		{"twelve on paper", "lbbb", "lead:II axis ladder", "3x4 + rhythm"},
		{"twelve on paper, another form", "lbbb", "lead:II egm:HRA axis", "6x2"},
	} {
		t.Run(c.name, func(t *testing.T) {
			lanes := strings.Fields(c.lanes)
			file, _ := presets.Read(c.preset)
			view, err := json.Marshal(map[string]any{"plan": json.RawMessage(file), "view": map[string]any{"width_mm": 100, "height_mm": 100, "mm_per_s": 25, "ladder": "full", "lanes": lanes, "paper": c.form}})
			if err != nil {
				t.Fatal(err)
			}
			reply, _ := session.New().Call("compute", view)
			var page struct {
				Scene struct {
					Lanes []struct {
						Name string `json:"name"`
					} `json:"lanes"`
				} `json:"scene"`
			}
			if err := json.Unmarshal(reply, &page); err != nil {
				t.Fatal(err)
			}
			r := usual()
			r.Plan, r.Lanes, r.Form, r.Paper, r.To, r.Gain = file, lanes, c.form, "a3-landscape", 4000, 5
			if !r.formed() || !r.laned() || !r.sized() {
				t.Fatal("the request is refused")
			}
			for name, lay := range map[string]func(*Request) ([]*scene.Scene, error){"strip": strip, "report": onePage} {
				pages, err := lay(r)
				if err != nil {
					t.Fatal(name, err)
				}
				if len(pages[0].Lanes) != len(page.Scene.Lanes) {
					t.Fatalf("%s has %+v, the page %+v", name, pages[0].Lanes, page.Scene.Lanes)
				}
				for i, l := range page.Scene.Lanes {
					if got := pages[0].Lanes[i].Name; got != l.Name {
						t.Errorf("%s: lane %d is %s, on the page %s", name, i, got, l.Name)
					}
				}
			}
		})
	}
}

// A long strip goes on over pages; the header tells how many, and each can be had.
func TestALongStripGoesOnOverPages(t *testing.T) {
	w := ask(t, "/press/strip.svg?plan=normal&ladder=none&page=2&to_ms=0&speed_mm_s=200", "")
	if w.Code != 200 || w.Header().Get("X-Pages") == "1" {
		t.Fatalf("%d: %s pages", w.Code, w.Header().Get("X-Pages"))
	}
	if first := ask(t, "/press/strip.svg?plan=normal&ladder=none&to_ms=0&speed_mm_s=200", ""); bytes.Equal(first.Body.Bytes(), w.Body.Bytes()) {
		t.Error("pages 1 and 2 are the same")
	}
}

// A fault of the engine is an answer, not the end of the host.
func TestAFaultIsAnswered(t *testing.T) {
	routes["strip"]["fault"] = func(*Request) (*printed, error) { panic("a wheel came off") }
	defer delete(routes["strip"], "fault")
	w := ask(t, "/press/strip.fault?plan=normal", "")
	if got := refused(t, w); w.Code != 500 || !strings.Contains(got.Fault, "a wheel came off") {
		t.Errorf("%d: %+v", w.Code, got)
	}
}
