package sim

import (
	"encoding/json"
	"math/rand/v2"
	"testing"

	"escapement/engine/plan"
)

// object is a part of a plan file.
type object = map[string]any

func (d dice) whole(lo, hi int) float64 { return float64(d.int(lo, hi)) }

// orNull is a number, or null in one case of four.
func (d dice) orNull(lo, hi int) any {
	if d.chance(0.25) {
		return nil
	}
	return d.whole(lo, hi)
}

// aHeart draws a heart that may need a pacemaker.
func (d dice) aHeart() object {
	fast := object{"ah_ms": d.orNull(50, 200), "va_ms": d.orNull(130, 420), "erp_ms": d.whole(200, 380), "wenckebach_cl_ms": d.whole(390, 560), "concealed_from": d.between(0.5, 1)}
	h := object{"sinus": object{"rate_bpm": d.whole(30, 160), "jitter_ms": d.either(0.5, 0, 150)}, "atria": object{"erp_ms": d.whole(160, 300)},
		"av_node": object{"fast": fast, "ah_at_cycle_ms": 1000, "erp_at_cycle_ms": 800}}
	if d.chance(0.2) {
		fast["drop"] = "30%"
	}
	if d.chance(0.2) {
		h["his_purkinje"] = object{"right_bundle": nil}
	}
	var foci []object
	for _, site := range []string{"av_junction", "rv_apex", "lv_lateral", "left_atrium"} {
		if d.chance(0.15) {
			foci = append(foci, object{"site": site, "rate_bpm": d.whole(25, 130), "jitter_ms": d.whole(0, 200)})
		}
	}
	if foci != nil {
		h["foci"] = foci
	}
	return h
}

// core draws the timing cycles of a device without further features.
func (d dice) core(modes ...string) object {
	o := object{"mode": modes[d.IntN(len(modes))], "lower_rate_bpm": d.whole(40, 90), "max_tracking_rate_bpm": d.whole(95, 170), "paced_av_ms": d.whole(60, 300), "sensed_av_ms": d.whole(40, 280),
		"pvarp_ms": d.whole(150, 450), "pvab_ms": d.whole(0, 150), "ventricular_refractory_ms": d.whole(150, 340), "atrial_blanking_ms": d.whole(0, 150), "atrial_refractory_ms": d.whole(150, 400),
		"pavb_ms": d.whole(0, 50), "crosstalk_window_ms": d.whole(60, 120), "safety_stimulus": d.chance(0.7), "base_timing": []string{"ventricular", "atrial", "modified_atrial"}[d.IntN(3)],
		"refractory_p_counts": d.chance(0.5)}
	if d.chance(0.4) {
		o["post_pvc_pvarp_ms"] = d.whole(200, 500)
	}
	leads := object{}
	if d.chance(0.2) {
		leads["far_field_ms"] = d.whole(20, 200)
	}
	if d.chance(0.2) {
		leads["t_wave_ms"] = d.whole(200, 400)
	}
	if d.chance(0.15) {
		leads["atrial"] = object{"amplitude_v": 0.5}
	}
	if d.chance(0.1) {
		leads["ventricular"] = object{"site": "his"}
	}
	o["leads"] = leads
	return o
}

// features adds what devices do beyond the timing cycles.
func (d dice) features(o object) {
	add := func(name string, v any) {
		if d.chance(0.25) {
			o[name] = v
		}
	}
	mode := o["mode"].(string)
	tracks := mode == "DDD" || mode == "VDD"
	if d.chance(0.3) {
		o["mode"] = mode + "R"
		o["sensor"] = object{"slope_bpm": d.whole(10, 80), "rise_s": d.whole(0, 5), "fall_s": d.whole(0, 5), "activity_at_ms": []int{1000, 6000}, "activity_level": []float64{d.Float64(), d.Float64()}}
	}
	add("adaptive_av", object{"shortest_ms": 60, "from_bpm": 70, "to_bpm": 130})
	add("adaptive_pvarp", object{"shortest_ms": 160, "from_bpm": 70, "to_bpm": 130})
	add("hysteresis", object{"rate_bpm": 35, "every": d.int(0, 5), "cycles": 2})
	add("longer_av", object{"by_ms": 100, "longest_ms": 350, "every": 4, "misses": 1})
	add("shorter_av", object{"by_ms": 30, "shortest_ms": 60, "beats": 5})
	add("noise", object{"window_ms": 100, "inhibits": d.chance(0.5)})
	add("change_limit", object{"longer_percent": 12, "shorter_percent": 9})
	add("night", object{"rate_bpm": 35, "from_ms": 3000, "to_ms": 7000})
	add("rate_fall", object{"from_bpm": 90, "within_ms": 4000, "beats": 1, "rate_bpm": 100, "for_ms": 3000})
	add("stabilise", object{"by_ms": 100, "rate_bpm": 100})
	if tracks {
		add("mode_switch", object{"rate_bpm": 150, "short": 3, "of": 5, "mode": "VVI", "return": 2, "ramp_ms": d.int(0, 60)})
		add("loop", object{"beats": 3, "rate_margin_ms": 300, "margin_ms": 20, "pvarp_ms": 450, "withhold": d.chance(0.5)})
	}
	if mode == "DDD" {
		add("backup", object{"misses": 2, "of": 4, "delay_ms": 80, "retest_ms": 2000, "retest_max_ms": 8000})
		add("magnet", object{"mode": "DOO", "from_ms": 4000, "to_ms": 6000})
		if d.chance(0.25) {
			o["mode"] = "DDDOV"
			delete(o, "sensor")
			o["left"] = object{"offset_ms": d.int(-60, 60), "only": d.chance(0.3), "av_to_right": d.chance(0.5), "second_point_ms": d.int(0, 30)}
		}
	}
}

func (d dice) interventions() []object {
	out := []object{}
	for range d.IntN(5) {
		at := object{"at_ms": d.whole(500, 9000)}
		switch d.IntN(6) {
		case 0:
			at["do"], at["channel"], at["for_ms"] = "lose_capture", []string{"A", "V"}[d.IntN(2)], d.whole(100, 3000)
		case 1:
			at["do"], at["channel"], at["for_ms"] = "undersense", []string{"A", "V"}[d.IntN(2)], d.whole(100, 3000)
		case 2:
			at["do"], at["channel"], at["cycle_ms"], at["count"] = "signal", []string{"A", "V"}[d.IntN(2)], d.whole(20, 400), d.int(1, 20)
		case 3:
			at["do"], at["site"], at["cycle_ms"], at["count"] = "train", "right_atrium", d.whole(180, 500), d.int(2, 20)
		default:
			at["do"], at["site"] = "stimulate", []string{"rv_apex", "lv_lateral", "left_atrium"}[d.IntN(3)]
		}
		out = append(out, at)
	}
	return out
}

// devices draws so many plans with a device that can run, and hands each over.
func devices(t *testing.T, n int, make func(d dice) object, look func(file []byte, prog *plan.Program, device object)) {
	t.Helper()
	if testing.Short() {
		n /= 10
	}
	done := 0
	for seed := uint64(1); done < n; seed++ {
		if seed > uint64(20*n) {
			t.Fatalf("only %d of %d seeds made a plan that can run", done, seed)
		}
		d := dice{rand.New(rand.NewPCG(seed, 7))}
		o := make(d)
		file, err := json.Marshal(object{"format": plan.Format, "span_ms": 12000, "seed": seed, "heart": d.aHeart(), "pacemaker": o, "interventions": d.interventions()})
		if err != nil {
			t.Fatal(err)
		}
		p, err := plan.Decode(file)
		if err != nil {
			t.Fatalf("seed %d: %v\n%s", seed, err, file)
		}
		prog, err := p.Compile()
		if err != nil {
			continue // numbers that cannot hold together
		}
		done++
		look(file, prog, o)
		if t.Failed() {
			t.Fatalf("seed %d: %s", seed, file)
		}
	}
}
