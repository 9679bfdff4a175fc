package extract

import "hash/maphash"

// idSet remembers claim ids by 128-bit hashes with seeds of its own, so that a
// file cannot be made to collide: 16 bytes a slot, at most three slots in four
// in use. It grows in 256 parts of which one is moved at a time, so that
// growth does not double the memory.
type idSet struct {
	seeds [2]maphash.Seed
	parts [256]idPart
}

type idPart struct {
	slots [][2]uint64 // a power of two of them; zero is a free slot
	used  int
}

func newIDSet() *idSet {
	return &idSet{seeds: [2]maphash.Seed{maphash.MakeSeed(), maphash.MakeSeed()}}
}

// add enters an id and tells whether it was there before.
func (s *idSet) add(id []byte) (before bool) {
	key := [2]uint64{maphash.Bytes(s.seeds[0], id), maphash.Bytes(s.seeds[1], id) | 1}
	return s.parts[key[0]>>56].add(key)
}

func (p *idPart) add(key [2]uint64) (before bool) {
	if 4*(p.used+1) > 3*len(p.slots) {
		old := p.slots
		p.slots, p.used = make([][2]uint64, max(16, 2*len(old))), 0
		for _, k := range old {
			if k != ([2]uint64{}) {
				p.add(k)
			}
		}
	}
	mask := uint64(len(p.slots) - 1)
	for i := key[0] & mask; ; i = (i + 1) & mask {
		switch p.slots[i] {
		case key:
			return true
		case [2]uint64{}:
			p.slots[i] = key
			p.used++
			return false
		}
	}
}
