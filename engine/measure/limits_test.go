package measure

import "testing"

// The edges of the findings: too little is no finding, and numbers that would be wrong
// are left out.
func TestDeviceFindingsKeepTheirLimits(t *testing.T) {
	_, r := paced(t, `"span_ms":20000,"heart":{`+blockedNode+`},"pacemaker":{"mode":"VVI"}`)
	if f := r.finding("complete_av_block"); f == nil || f.Surface != "undetermined" || f.Rivals != nil {
		t.Errorf("paced beats are no escape: got %+v", f)
	}
	_, r = paced(t, `"span_ms":9000,"heart":{},"pacemaker":{"mode":"DDD"}`)
	for _, b := range r.Beats {
		if b.Kind == "P" && b.To > 0 && b.PR != nil {
			t.Errorf("fusion: PR %v of a P that met a paced beat; want none", *b.PR)
		}
	}
	_, r = paced(t, `"span_ms":9000,"heart":{`+sinusEvery("54.54545454545455")+`,`+up("167.1")+`},"pacemaker":{"mode":"DDD","lower_rate_bpm":50,"loop":{"beats":2}},`+pvcAt3300)
	if r.finding("endless_loop_tachycardia") != nil {
		t.Errorf("two turns are no tachycardia: %s", r.Statement)
	}
	synchrony := `"heart":{"sinus":{"rate_bpm":30},"atria":{"erp_ms":230},` + up("117.1") + `},"pacemaker":{"mode":"DDD","lower_rate_bpm":80,"paced_av_ms":300,"pvarp_ms":300},"interventions":[{"at_ms":3000,"do":"lose_capture","channel":"A","for_ms":700}]`
	_, r = paced(t, `"span_ms":4400,`+synchrony)
	if r.finding("repetitive_nonreentrant_va_synchrony") != nil || r.finding("functional_non_capture") == nil {
		t.Errorf("once is no synchrony but a stimulus lost in refractory tissue: %s", r.Statement)
	}
	// The sinus climbs through the upper rate of 120: before the first P that is lost
	// the AV interval is 150 for many beats, which is no period of so many to one.
	_, r = paced(t, `"span_ms":24000,"heart":{`+sinusEvery("100")+`,`+blockedNode+`},"pacemaker":{"mode":"DDD"},"interventions":[{"at_ms":2000,"do":"set","field":"heart.sinus.rate_bpm","to":123,"over_ms":16000}]`)
	if f := r.finding("upper_rate_wenckebach"); f == nil || f.Ratio != "" || len(f.PRs) < 2 || f.PRs[0] != 150 || f.PRs[1] <= 150 {
		t.Errorf("ramp: got %+v, want AV intervals from the last 150 on and no ratio", f)
	}
}

// A stimulus may begin what then goes on by itself: that is no stimulation.
func TestReentryFromOneStimulus(t *testing.T) {
	h := newHeart(6000)
	v := h.stimulate(1000, "rv_apex")
	for range 6 {
		v = h.along(h.along(v, "rv_apex-lv_septum", 60), "rv_apex-lv_septum", 190)
	}
	r := Of(h.log(t), nil)
	if r.finding("ventricular_tachycardia") == nil || r.finding("ventricular_stimulation") != nil {
		t.Errorf("got %v, want ventricular_tachycardia", slugs(r))
	}
}
