package pacer

import "escapement/engine/event"

// silenced leaves a stimulus out in noise, where that is the response, and begins the
// escape anew.
func (d *Device) silenced(n WindowName) bool {
	if !d.s.Noise.Inhibits || !d.within(n) {
		return false
	}
	d.avRunning = false
	d.restart(d.spans[n].id)
	return true
}

// prolongNoise begins the noise window and the refractory period around it anew. It
// gives the window that ran before.
func (d *Device) prolongNoise(n, refractory WindowName, id event.ID) event.ID {
	before := d.spans[n].id
	w := d.s.Noise.Window
	if d.spans[refractory].until < d.now.Add(w) {
		d.open(refractory, w, id, ByNoise)
	}
	d.open(n, w, id, "")
	return before
}
