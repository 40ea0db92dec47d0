package plan

import (
	"reflect"
	"testing"

	"pgregory.net/rapid"
)

// A variant is the same program, whatever was compiled before it, as a plan in which
// its values stand.
func TestAVariantIsAsIfTyped(t *testing.T) {
	p, err := Decode([]byte(swept + `{"x":{"field":"seed","values":[1]}}}`))
	if err != nil {
		t.Fatal(err)
	}
	fields := []string{"heart.sinus.rate_bpm", "heart.av_node.fast.ah_ms", "pacemaker.pvarp_ms", "interventions[0].at_ms", "interventions[1].to", "heart.his_purkinje.right_bundle"}
	rapid.Check(t, func(t *rapid.T) {
		v := NewVariants(p, fields...)
		for range 6 {
			one := func(name string, of ...float64) Value { return Value{Number: rapid.SampledFrom(of).Draw(t, name)} }
			values := []Value{one("rate", 60, 75), one("ah", 80, 100, 330), one("pvarp", 50, 250, 300), one("at", 900, 1000), one("to", 90, 100), {Text: "default"}}
			if rapid.Bool().Draw(t, "no AV") {
				values[1] = Value{Null: true}
			}
			if rapid.Bool().Draw(t, "bundle") {
				values[5] = Value{Null: true}
			}
			var extra Item
			if rapid.Bool().Draw(t, "extra") {
				extra = Extra("his", 1234)
			}
			got, gotErr := v.Program(values, 7, extra)
			typed, err := Decode(v.Plan(values, 7, extra).Encode())
			if err != nil {
				t.Fatal(err)
			}
			want, wantErr := typed.Compile()
			if (gotErr == nil) != (wantErr == nil) || gotErr != nil && gotErr.Error() != wantErr.Error() {
				t.Fatalf("%v, want %v", gotErr, wantErr)
			}
			if !reflect.DeepEqual(got, want) {
				t.Fatalf("%v: programs differ", values)
			}
		}
	})
}
