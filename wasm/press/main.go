//go:build js && wasm

// Command press is the print service as a WebAssembly module: the handler of package
// service, run by the workers library. The page starts it in a worker when a print is
// asked for, an edge host when a request comes; both start a fresh instance for every
// request, so nothing of one plan is left for the next.
package main

import (
	"github.com/syumai/workers"

	"escapement/wasm/press/service"
)

func main() { workers.Serve(service.New()) }
