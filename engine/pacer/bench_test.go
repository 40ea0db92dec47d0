package pacer

import (
	"testing"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// deaf is a recorder that keeps nothing.
type deaf event.ID

func (d *deaf) next() event.ID                           { *d++; return event.ID(*d) }
func (d *deaf) Stimulate(Pulse) event.ID                 { return d.next() }
func (d *deaf) Open(Window) event.ID                     { return d.next() }
func (d *deaf) Close(_, _ event.ID)                      {}
func (d *deaf) Mode(_, _, _ string, _ event.ID) event.ID { return d.next() }

// day runs a device for so long against a sinus rhythm that conducts every other beat.
func day(d *Device, r *deaf, from, span tick.Time) {
	for p := from; p < from+span; p += tick.Time(ms(700)) {
		expire(d, p)
		d.Sense(p, Atrial, r.next())
		if v := p.Add(ms(120)); p/tick.Time(ms(700))%2 == 0 {
			expire(d, v)
			d.Sense(v, Ventricular, r.next())
		}
	}
}

func expire(d *Device, until tick.Time) {
	for t := d.Due(); t < until; t = d.Due() {
		d.Expire(t)
	}
}

func TestSteadyStateDoesNotAllocate(t *testing.T) {
	r := new(deaf)
	s := Default()
	s.Switch, s.Loop, s.LongerAV = Switch{Rate: 170, Short: 4, Of: 7}, Loop{Beats: 8, PVARP: ms(400)}, LongerAV{By: ms(100), Every: 8}
	d := New(s, r)
	d.Start(0)
	at := tick.Time(0)
	if n := testing.AllocsPerRun(20, func() { day(d, r, at, 70*tick.Time(tick.Second)); at += 70 * tick.Time(tick.Second) }); n != 0 {
		t.Errorf("%v allocations in 70 s", n)
	}
}

func BenchmarkDay(b *testing.B) {
	for b.Loop() {
		r := new(deaf)
		d := New(Default(), r)
		d.Start(0)
		day(d, r, 0, 24*3600*tick.Time(tick.Second))
		b.ReportMetric(float64(*r), "events/op")
	}
}
