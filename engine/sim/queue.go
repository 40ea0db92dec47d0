package sim

import "escapement/engine/tick"

// class orders what happens at one instant. The table is written once, here:
// numbers change first, then impulses that stopped are recorded, impulses arrive
// (atrium before ventricle), the device takes notice, foci discharge, and stimuli come last, so that a
// tissue that is reached at the very instant of a stimulus counts as reached.
type class uint8

const (
	classChange class = iota
	classFault
	classStop
	classArriveSinus
	classArriveAtrium
	classArriveNode
	classArriveHis
	classArrivePurkinje
	classArriveVentricle
	classCapture
	classSense
	classDischarge
	classStimulate
)

// item is something due. The order of the queue is total: time, class, and the
// number of its insertion.
type item struct {
	t     tick.Time
	order uint64 // class in the upper byte, insertion number below
	gen   uint32 // the transit or cycle it belongs to; stale ones are skipped
	index int32  // path, focus, stimulus, change or stop, by class
	dir   uint8
}

func (a *item) before(b *item) bool {
	return a.t < b.t || a.t == b.t && a.order < b.order
}

func (a *item) class() class { return class(a.order >> 56) }

// queue is a binary heap of items without interfaces: it is the inner loop.
type queue struct {
	items []item
	count uint64
}

// begin empties the queue and makes room.
func (q *queue) begin(room int) {
	if cap(q.items) < room {
		q.items = make([]item, 0, room)
	}
	q.items, q.count = q.items[:0], 0
}

// place is the next place in the order of an instant, for an item of a class.
func (q *queue) place(c class) uint64 {
	q.count++
	return uint64(c)<<56 | q.count
}

func (q *queue) push(t tick.Time, c class, index int, dir uint8, gen uint32) {
	q.put(item{t: t, order: q.place(c), gen: gen, index: int32(index), dir: dir})
}

func (q *queue) put(it item) {
	q.items = append(q.items, it)
	i := len(q.items) - 1
	for i > 0 {
		up := (i - 1) / 2
		if !it.before(&q.items[up]) {
			break
		}
		q.items[i] = q.items[up]
		i = up
	}
	q.items[i] = it
}

// next is the time of the earliest item, or tick.Never.
func (q *queue) next() tick.Time {
	if len(q.items) == 0 {
		return tick.Never
	}
	return q.items[0].t
}

func (q *queue) pop() item {
	first := q.items[0]
	last := len(q.items) - 1
	it := q.items[last]
	q.items = q.items[:last]
	i := 0
	for {
		down := 2*i + 1
		if down >= last {
			break
		}
		if r := down + 1; r < last && q.items[r].before(&q.items[down]) {
			down = r
		}
		if !q.items[down].before(&it) {
			break
		}
		q.items[i] = q.items[down]
		i = down
	}
	if last > 0 {
		q.items[i] = it
	}
	return first
}
