package event

import (
	"encoding/binary"
	"hash"
	"hash/fnv"
)

// Fingerprint is a 64-bit hash over the names and every field of every event:
// equal for two logs that say the same, and the cheapest regression test there
// is. It is the same natively and in WebAssembly.
func (l *Log) Fingerprint() uint64 {
	h := fnv.New64a()
	put(h, int64(l.Span))
	for i := range l.Sites {
		h.Write([]byte(l.Sites[i].Name))
		put(h, int64(l.Sites[i].Tissue))
	}
	for i := range l.Paths {
		p := &l.Paths[i]
		h.Write([]byte(p.Name))
		put(h, int64(p.Tissue), int64(p.From), int64(p.To))
	}
	for i := range l.Events {
		e := &l.Events[i]
		captured := int64(0)
		if e.Captured {
			captured = 1
		}
		put(h, int64(e.ID), int64(e.Cause), int64(e.T), int64(e.Kind), int64(e.Rule), int64(e.Dir),
			int64(e.Site), int64(e.Path), int64(e.Depth), captured, int64(e.Recovery), int64(e.Needed), int64(e.Until), int64(e.Channel), int64(e.Use), int64(e.By), int64(e.Outcome))
		h.Write([]byte(e.Field))
		h.Write([]byte(e.To))
		h.Write([]byte(e.Why))
	}
	return h.Sum64()
}

func put(h hash.Hash, values ...int64) {
	var b [8]byte
	for _, v := range values {
		binary.LittleEndian.PutUint64(b[:], uint64(v))
		h.Write(b[:])
	}
}
