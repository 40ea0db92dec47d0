// Command stamp writes into a built site's offline.js what the site consists of: every
// file with the hash of its content, and one version made from all of them. So a
// browser that keeps the site keeps one version whole, and sees when there is another.
//
//	stamp FOLDER
package main

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// mark is what stands in offline.js before it is stamped.
const mark = `/* stamp */ { version: "", files: {}, later: {} }`

// listing is what offline.js is told. The values are SHA-256 in hex.
type listing struct {
	Version string            `json:"version"`
	Files   map[string]string `json:"files"`
	Later   map[string]string `json:"later"` // large and not needed at first: fetched when the page is idle
}

func main() {
	if len(os.Args) != 2 {
		fmt.Fprintln(os.Stderr, "stamp takes one folder")
		os.Exit(2)
	}
	version, err := stamp(os.Args[1])
	if err != nil {
		fmt.Fprintln(os.Stderr, "stamp:", err)
		os.Exit(1)
	}
	fmt.Println("version", version)
}

func stamp(dir string) (string, error) {
	own := filepath.Join(dir, "offline.js")
	script, err := os.ReadFile(own)
	if err != nil {
		return "", err
	}
	if strings.Count(string(script), mark) != 1 {
		return "", errors.New("offline.js does not hold the place for its list exactly once")
	}
	l := listing{Files: map[string]string{}, Later: map[string]string{}}
	err = filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || path == own {
			return err
		}
		data, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(dir, path)
		if err != nil {
			return err
		}
		sum := sha256.Sum256(data)
		name := filepath.ToSlash(rel)
		if later(name) {
			l.Later[name] = hex.EncodeToString(sum[:])
		} else {
			l.Files[name] = hex.EncodeToString(sum[:])
		}
		return nil
	})
	if err != nil {
		return "", err
	}
	all, err := json.Marshal(l) // keys in order
	if err != nil {
		return "", err
	}
	sum := sha256.Sum256(append(all, script...))
	l.Version = hex.EncodeToString(sum[:8])
	if all, err = json.Marshal(l); err != nil {
		return "", err
	}
	return l.Version, os.WriteFile(own, []byte(strings.Replace(string(script), mark, string(all), 1)), 0o644)
}

// later tells whether a file can wait: any WebAssembly beside the engine's own.
func later(name string) bool {
	return strings.HasSuffix(name, ".wasm") && name != "engine/escapement.wasm"
}
