//go:build js && wasm

// Command live is the engine as the page runs it, in a web worker. It registers
// one function,
//
//	call(op: string, json: string) -> {json: string, points: Float32Array | undefined}
//	                               or {fault: string}
//
// and waits. What the operations are is told by package session; a fault is a
// panic inside the engine, which no input should cause: its text goes to the page,
// which starts a new worker.
package main

import (
	"fmt"
	"runtime/debug"
	"syscall/js"
	"unsafe"

	"escapement/wasm/live/session"
)

func main() {
	// A worker has no other thread to collect on: what is collected is paid for in the
	// frame. A timeline of a minute takes some 20 MB.
	debug.SetGCPercent(400)
	s := session.New()
	js.Global().Set("call", js.FuncOf(func(_ js.Value, args []js.Value) any {
		return call(s, args[0].String(), args[1].String())
	}))
	select {}
}

func call(s *session.Session, op, args string) (reply any) {
	defer func() {
		if r := recover(); r != nil {
			reply = map[string]any{"fault": fmt.Sprintf("%v\n%s", r, debug.Stack())}
		}
	}()
	text, points := s.Call(op, []byte(args))
	out := map[string]any{"json": string(text)}
	if len(points) > 0 {
		out["points"] = float32Array(points)
	}
	return out
}

// float32Array copies the numbers into an array of their own, whose buffer can
// be handed on.
func float32Array(points []float32) js.Value {
	raw := unsafe.Slice((*byte)(unsafe.Pointer(&points[0])), 4*len(points))
	array := js.Global().Get("Uint8Array").New(len(raw))
	js.CopyBytesToJS(array, raw)
	return js.Global().Get("Float32Array").New(array.Get("buffer"))
}
