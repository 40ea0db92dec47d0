package service

import (
	"bytes"
	"io"
	"net/http"

	"escapement/engine/export"
	"escapement/engine/lead"
	"escapement/engine/timeline"
)

// exports are the whole strip for other programs. Of the request they heed the plan
// and, for EDF+, the leads.
var exports = map[string]maker{
	"edf": exported("application/octet-stream", func(w io.Writer, s *timeline.Timeline, leads []lead.Name) error {
		if s.Record == nil {
			return refuse(http.StatusUnprocessableEntity, "plan", "a strip without leads", "strips of up to 15 min", "take the table or the document")
		}
		return export.EDF(w, s, export.EDFOptions{Leads: leads})
	}),
	"csv":  exported("text/csv; charset=utf-8", func(w io.Writer, s *timeline.Timeline, _ []lead.Name) error { return export.CSV(w, s) }),
	"json": exported("application/json; charset=utf-8", func(w io.Writer, s *timeline.Timeline, _ []lead.Name) error { return export.JSON(w, s) }),
}

func exported(kind string, write func(io.Writer, *timeline.Timeline, []lead.Name) error) maker {
	return func(r *Request) (*printed, error) {
		c, err := r.run(r.Plan)
		if err != nil {
			return nil, err
		}
		var b bytes.Buffer
		if err := write(&b, c, r.leads); err != nil {
			return nil, err
		}
		return &printed{kind: kind, pages: 1, bytes: b.Bytes()}, nil
	}
}
