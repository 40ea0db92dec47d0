package service

import (
	"net/http"

	"escapement/engine/lead"
	"escapement/engine/report"
	"escapement/engine/scene"
	"escapement/engine/tick"
	"escapement/engine/timeline"
)

// onePage is the report of a plan: strip, findings, intervals, arithmetic, settings.
func onePage(r *Request) ([]*scene.Scene, error) {
	c, err := r.run(r.Plan)
	if err != nil {
		return nil, err
	}
	o, err := r.report()
	if err != nil {
		return nil, err
	}
	pages, err := report.Build(c, o)
	return pages, r.room(err)
}

// comparison is two plans one above the other on one time axis.
func comparison(r *Request) ([]*scene.Scene, error) {
	if len(r.Before) == 0 {
		return nil, refuse(http.StatusBadRequest, "before", "nothing", fields[1].allowed, "a comparison takes two plans")
	}
	var cases [2]*timeline.Timeline
	for i, raw := range [...][]byte{r.Before, r.Plan} {
		var err error
		if cases[i], err = r.run(raw); err != nil {
			return nil, err
		}
	}
	o, err := r.report()
	if err != nil {
		return nil, err
	}
	pages, err := report.Compare(cases, [2]string{"before", "after"}, report.Differences(cases[0], cases[1]), o)
	return pages, r.room(err)
}

func (r *Request) report() (report.Options, error) {
	if r.Paper == Roll {
		return report.Options{}, refuse(http.StatusBadRequest, "paper", Roll, "a4, letter, a3, each also with -landscape", "text needs pages")
	}
	leads := r.leads
	if r.Leads != nil && leads == nil {
		leads = []lead.Name{}
	}
	return report.Options{
		Paper: r.paper, Date: r.Date, Version: r.Version, From: tick.Time(tick.MS(r.From)), To: tick.Time(tick.MS(r.To)),
		Leads: leads, Lanes: r.Lanes, EGMGain: r.EGMGain, Form: r.twelve, Ladder: r.form(), NoLadder: r.Ladder == "none", NoDevice: !r.Device, MMPerS: r.Speed, MMPerMV: r.Gain,
	}, nil
}
