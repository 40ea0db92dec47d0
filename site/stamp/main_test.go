package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func build(t *testing.T, files map[string]string) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range files {
		path := filepath.Join(dir, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// One changed letter anywhere is another version; the same content is the same.
func TestTheVersionIsTheContent(t *testing.T) {
	script := "const SITE = " + mark + ";"
	base := map[string]string{"offline.js": script, "index.html": "a", "engine/escapement.wasm": "b", "engine/press.wasm": "c"}
	first, err := stamp(build(t, base))
	if err != nil || len(first) != 16 {
		t.Fatalf("version %q, %v", first, err)
	}
	if again, _ := stamp(build(t, base)); again != first {
		t.Errorf("the same content: %s and %s", first, again)
	}
	for name := range base {
		other := map[string]string{}
		for k, v := range base {
			other[k] = v
		}
		other[name] += " "
		if got, _ := stamp(build(t, other)); got == first {
			t.Errorf("%s changed and the version did not", name)
		}
	}
}

func TestWhatCanWaitIsToldApart(t *testing.T) {
	dir := build(t, map[string]string{"offline.js": "const SITE = " + mark + ";", "index.html": "a", "engine/escapement.wasm": "b", "engine/press.wasm": "c"})
	if _, err := stamp(dir); err != nil {
		t.Fatal(err)
	}
	got, err := os.ReadFile(filepath.Join(dir, "offline.js"))
	if err != nil {
		t.Fatal(err)
	}
	// SHA-256 of "c", by coreutils' sha256sum.
	if !strings.Contains(string(got), `"later":{"engine/press.wasm":"2e7d2c03a9507ae265ecf5b5356885a53393a2029d241394997265a1a25aefc6"}`) || strings.Contains(string(got), `"offline.js"`) {
		t.Errorf("%s", got)
	}
}

func TestAScriptWithoutThePlaceIsRefused(t *testing.T) {
	if _, err := stamp(build(t, map[string]string{"offline.js": "x"})); err == nil {
		t.Error("no error")
	}
}
