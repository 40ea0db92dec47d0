package main

import (
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestServeHandsOutFilesAsABrowserWantsThem(t *testing.T) {
	dir := t.TempDir()
	for name, text := range map[string]string{"index.html": "<!doctype html>", "a.wasm": "\x00asm", "a.js": "1", "css/a.css": "a{}", "icon.svg": "<svg/>"} {
		path := filepath.Join(dir, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	host := site(dir)
	for _, c := range []struct {
		name, method, path string
		status             int
		kind               string
	}{
		{"the page", "GET", "/", 200, "text/html"},
		{"WebAssembly streams only under its own type", "GET", "/a.wasm", 200, "application/wasm"},
		{"a module", "GET", "/a.js", 200, "text/javascript"},
		{"a style", "GET", "/css/a.css", 200, "text/css"},
		{"an image", "GET", "/icon.svg", 200, "image/svg+xml"},
		{"no list of a folder", "GET", "/css/", 404, ""},
		{"nothing outside", "GET", "/../serve.go", 404, ""},
		{"what is not there", "GET", "/b.js", 404, ""},
		{"nothing is taken", "POST", "/", 405, ""},
		{"a print", "GET", "/press/ladder.svg?plan=normal&to_ms=2000", 200, "image/svg+xml"},
		{"no such print", "GET", "/press/poster.svg?plan=normal", 404, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			w := httptest.NewRecorder()
			host.ServeHTTP(w, httptest.NewRequest(c.method, "http://127.0.0.1"+c.path, nil))
			if w.Code != c.status && (w.Code < 300 || w.Code >= 400 || c.status != 404) {
				t.Errorf("status %d, want %d", w.Code, c.status)
			}
			if got := w.Header().Get("Content-Type"); w.Code == http.StatusOK && !strings.HasPrefix(got, c.kind) {
				t.Errorf("type %q, want %q", got, c.kind)
			}
		})
	}
}

func TestServeSaysWhatToDoWithoutASite(t *testing.T) {
	err := serve([]string{"-port", "0", "-dir", t.TempDir()})
	if err == nil || !strings.Contains(err.Error(), "make site") {
		t.Errorf("got %v, want a word about make site", err)
	}
}

// A page of another origin cannot make this server compute.
func TestServePrintsForItsOwnPageAlone(t *testing.T) {
	for _, c := range []struct {
		name, site string
		status     int
	}{
		{"a program", "", 200},
		{"its own page", "same-origin", 200},
		{"another page", "cross-site", 403},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := httptest.NewRequest("POST", "http://127.0.0.1/press/ladder.svg", strings.NewReader(`{"plan":"normal","to_ms":2000}`))
			if c.site != "" {
				r.Header.Set("Sec-Fetch-Site", c.site)
			}
			w := httptest.NewRecorder()
			site(t.TempDir()).ServeHTTP(w, r)
			if w.Code != c.status {
				t.Errorf("%d, want %d: %s", w.Code, c.status, w.Body)
			}
		})
	}
}

// The header says what the page says of itself, so that both are tested by either.
func TestThePolicyOfTheHeaderIsThatOfThePage(t *testing.T) {
	page, err := os.ReadFile(filepath.Join("..", "..", "..", "site", "index.html"))
	if err != nil {
		t.Fatal(err)
	}
	own, _, ok := strings.Cut(policy, "; frame-ancestors")
	if !ok || !strings.Contains(string(page), `content="`+own+`"`) {
		t.Errorf("index.html does not hold %q", own)
	}
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "index.html"), []byte("x"), 0o644); err != nil {
		t.Fatal(err)
	}
	w := httptest.NewRecorder()
	files(dir).ServeHTTP(w, httptest.NewRequest("GET", "http://127.0.0.1/", nil))
	if got := w.Header().Get("Content-Security-Policy"); got != policy {
		t.Errorf("header %q", got)
	}
}
