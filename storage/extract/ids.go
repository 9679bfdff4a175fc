package extract

import (
	"bytes"
	"hash/maphash"
	"io"
	"math/bits"
)

// idSet remembers claim ids by 128-bit hashes with seeds of its own, so that a
// file cannot be made to collide: 16 bytes a slot, at most four slots in five
// in use. It grows in 64 parts of which one is moved at a time, so that growth
// does not double the memory.
type idSet struct {
	seeds [2]maphash.Seed
	parts [64]idPart
}

type idPart struct {
	slots [][2]uint64 // zero is a free slot
	used  int
}

// newIDSet makes a set with room for about so many ids.
func newIDSet(expected int) *idSet {
	s := &idSet{seeds: [2]maphash.Seed{maphash.MakeSeed(), maphash.MakeSeed()}}
	if room := expected / len(s.parts) * 4 / 3; room > 16 {
		for i := range s.parts {
			s.parts[i].slots = make([][2]uint64, room)
		}
	}
	return s
}

// add enters an id and tells whether it was there before.
func (s *idSet) add(id []byte) (before bool) {
	key := [2]uint64{maphash.Bytes(s.seeds[0], id), maphash.Bytes(s.seeds[1], id) | 1}
	return s.parts[key[1]>>58].add(key)
}

func (p *idPart) add(key [2]uint64) (before bool) {
	if 5*(p.used+1) > 4*len(p.slots) {
		old := p.slots
		p.slots, p.used = make([][2]uint64, max(16, len(old)*3/2)), 0
		for _, k := range old {
			if k != ([2]uint64{}) {
				p.add(k)
			}
		}
	}
	at, _ := bits.Mul64(key[0], uint64(len(p.slots)))
	for i := int(at); ; i++ {
		if i == len(p.slots) {
			i = 0
		}
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

// mostExpected bounds the room that is made before any id is seen.
const mostExpected = 2 << 20

// expectedRows estimates the rows of a text file from a piece of its middle.
func expectedRows(file io.ReaderAt, size int64) int {
	piece := make([]byte, min(size, 1<<16))
	n, err := file.ReadAt(piece, (size-int64(len(piece)))/2)
	if n == 0 || err != nil && err != io.EOF {
		return 0
	}
	lines := bytes.Count(piece[:n], []byte{'\n'})
	return int(min(int64(float64(lines)*float64(size)/float64(n)), mostExpected))
}
