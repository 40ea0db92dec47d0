// Package service prints plans over HTTP: a plan and what is wanted of it in, a
// drawing out. It is a plain http.Handler without state, so one and the same code
// answers behind `escapement serve`, in the page's worker and at the edge, and the
// same request gives the same bytes on all three.
//
//	POST /press/strip.pdf     {"plan":{...},"paper":"a4-landscape","date":"2026-12-01"}
//	GET  /press/strip.svg?plan=normal&leads=II,V1
//
// What can be asked for stands in [Routes], the names beside the plan in the table of
// request.go. In a query the same names hold the same values; a plan is there a JSON
// text or the name of a preset.
//
// Nothing is read from the host's clock: the date and the version on a print come
// with the request.
//
// Answers:
//
//	200  the drawing; X-Pages tells of how many pages the whole print is
//	400  the request cannot be read, or a value beside the plan is wrong
//	404  there is no such print
//	405  neither GET nor POST
//	413  more than MaxBytes
//	422  the plan cannot be computed, or not be printed as asked
//	500  a fault of the engine
//
// Every refusal is {"ok":false,"diagnoses":[{path, found, allowed, note, text}]},
// as the page knows it from the engine; a fault is {"ok":false,"fault":text}.
package service

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"runtime/debug"
	"strconv"
	"strings"

	"escapement/engine/plan"
)

// Prefix is where the routes begin.
const Prefix = "/press/"

// MaxBytes bounds a request: two plans and a little.
const MaxBytes = 2*plan.MaxBytes + 64<<10

// New is the handler.
func New() http.Handler { return http.HandlerFunc(serve) }

// refusal is an answer other than the drawing.
type refusal struct {
	status int
	found  plan.Diagnoses
}

func (r *refusal) Error() string { return r.found.Error() }

func refuse(status int, path, found, allowed, note string) error {
	return &refusal{status, plan.Diagnoses{{Path: path, Found: found, Allowed: allowed, Note: note}}}
}

func serve(w http.ResponseWriter, r *http.Request) {
	defer func() {
		if fault := recover(); fault != nil {
			answer(w, http.StatusInternalServerError, map[string]any{"ok": false, "fault": fmt.Sprintf("%v\n%s", fault, debug.Stack())})
		}
	}()
	p, err := fulfil(w, r)
	if err != nil {
		status := http.StatusUnprocessableEntity
		var no *refusal
		if errors.As(err, &no) {
			status, err = no.status, no.found
		}
		answer(w, status, map[string]any{"ok": false, "diagnoses": plan.Told(err)})
		return
	}
	h := w.Header()
	h.Set("Content-Type", p.kind)
	h.Set("Content-Disposition", `inline; filename="`+p.name+`"`)
	h.Set("X-Pages", strconv.Itoa(p.pages))
	send(w, http.StatusOK, p.bytes)
}

// fulfil makes what the request asks for.
func fulfil(w http.ResponseWriter, r *http.Request) (*printed, error) {
	name, format, _ := strings.Cut(strings.TrimPrefix(r.URL.Path, Prefix), ".")
	print, known := routes[name][format]
	if !known || !strings.HasPrefix(r.URL.Path, Prefix) {
		return nil, refuse(http.StatusNotFound, "", r.URL.Path, strings.Join(Routes(), ", "), "")
	}
	if r.Method != http.MethodGet && r.Method != http.MethodPost {
		w.Header().Set("Allow", "GET, POST")
		return nil, refuse(http.StatusMethodNotAllowed, "", r.Method, "GET, POST", "")
	}
	q, err := read(w, r)
	if err != nil {
		return nil, err
	}
	out, err := print(q)
	if err != nil {
		return nil, err
	}
	out.name = name + "." + format
	return out, nil
}

// read takes the request from the query or the body.
func read(w http.ResponseWriter, r *http.Request) (*Request, error) {
	if r.Method == http.MethodGet {
		if len(r.URL.RawQuery) > MaxBytes {
			return nil, tooLarge()
		}
		return fromQuery(r.URL.RawQuery)
	}
	if r.ContentLength > MaxBytes {
		return nil, tooLarge()
	}
	body, err := io.ReadAll(io.LimitReader(r.Body, MaxBytes+1))
	if err != nil {
		return nil, refuse(http.StatusBadRequest, "", "a body that breaks off", "a whole one", err.Error())
	}
	if len(body) > MaxBytes {
		return nil, tooLarge()
	}
	return fromJSON(body)
}

func tooLarge() error {
	return refuse(http.StatusRequestEntityTooLarge, "", fmt.Sprintf("more than %d bytes", MaxBytes), fmt.Sprintf("up to %d bytes", MaxBytes), "")
}

func answer(w http.ResponseWriter, status int, v any) {
	b, err := json.Marshal(v)
	if err != nil {
		panic("service: " + err.Error())
	}
	w.Header().Set("Content-Type", "application/json; charset=utf-8")
	send(w, status, b)
}

func send(w http.ResponseWriter, status int, body []byte) {
	h := w.Header()
	h.Set("Content-Length", strconv.Itoa(len(body)))
	h.Set("Cache-Control", "no-store")
	h.Set("X-Content-Type-Options", "nosniff")
	w.WriteHeader(status)
	w.Write(body) //nolint:errcheck // who asked has gone; there is nobody to tell
}
