package pacer

import (
	"math/bits"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// backupState is atrial pacing with ventricular backup. While alone the device times
// the atrium only and lets the heart conduct as late as it will.
type backupState struct {
	alone   bool
	seen    bool // a ventricular event since the last atrial one
	recent  uint32
	testing stage     // of conduction
	testAt  tick.Time // the next one
	step    tick.Dur
}

// stage is how far a test of conduction has come.
type stage uint8

const (
	noTest  stage = iota
	testDue       // the next atrial event begins it
	testOn        // its cycle runs
)

func (b *backupState) start(d *Device) {
	if d.s.Backup.Misses <= 0 || !d.s.Mode.dual() || !d.s.Mode.Tracks() {
		return
	}
	*b = backupState{alone: true, seen: true, step: d.s.Backup.Retest}
}

// cycleAlone begins an atrial cycle, and gives a stimulus soon if the one before
// passed without a ventricular event.
func (d *Device) cycleAlone(id event.ID, paced bool) {
	s, b := &d.s.Backup, &d.backup
	missed := !b.seen
	b.seen = false
	b.recent <<= 1
	if missed {
		b.recent |= 1
	}
	of := min(max(s.Of, s.Misses), 32)
	if missed && (b.testing == testOn || bits.OnesCount32(b.recent<<(32-of)) >= s.Misses) {
		d.leaveAlone(id)
	} else {
		switch b.testing {
		case testDue:
			b.testing = testOn
		case testOn:
			b.testing, b.step = noTest, s.Retest
		}
		d.single(slotAtrium, id, paced)
	}
	if missed {
		d.avRunning = !b.alone
		d.open(BackupDelay, max(s.Delay, least), id, "")
		d.set(slotVentricle, d.now.Add(max(s.Delay, least)), deadline{timer: BackupTimer, cause: id})
	}
}

// leaveAlone goes over to pacing both chambers until the next test.
func (d *Device) leaveAlone(id event.ID) {
	b := &d.backup
	if b.testing != noTest {
		b.step = min(2*b.step, max(d.s.Backup.RetestMax, d.s.Backup.Retest))
	}
	*b = backupState{step: b.step}
	if b.step > 0 {
		b.testAt = d.now.Add(b.step)
	}
	d.clear(slotAtrium)
	d.close(LowerRate, id)
	d.recordMode("no conduction", id)
}

// retest begins a test of conduction at a ventricular event when one is due.
func (d *Device) retest(id event.ID) bool {
	b := &d.backup
	if b.alone || b.testAt == 0 || d.now < b.testAt || d.magnet || d.sw.away {
		return false
	}
	*b = backupState{alone: true, seen: true, testing: testDue, step: b.step}
	cause := d.recordMode("test of conduction", id)
	d.close(PVARP, cause)
	d.close(UpperRate, cause)
	d.rearm(cause)
	return true
}
