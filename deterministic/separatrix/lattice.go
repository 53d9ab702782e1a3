package separatrix

import (
	"encoding/binary"
	"sync"
	"sync/atomic"

	"holdfast/deterministic"
)

// A Lattice labels molecule counts by the basin that they lie in, each point once:
// later calls read the label from memory. It is safe for concurrent use.
//
// Where the class has two dimensions a row of points is labelled by the pieces that
// the separatrices cut it into; only points beside a separatrix, and those of other
// classes, need a flow of their own.
type Lattice struct {
	m     *deterministic.Map
	rows  *rows   // nil where there are no curves
	size  []int64 // of the part kept in an array, by species
	dense []atomic.Int32
	far   [shards]shard
}

// shard is one part of the memory for points outside the array.
type shard struct {
	sync.RWMutex
	labels map[string]int32
}

const (
	shards = 64
	// mostDense is the most points that are kept in an array, four bytes each.
	mostDense = 1 << 21
	// notLabelled is the label of a point of no basin; 0 is none yet, s+1 that of state s.
	notLabelled = -1
)

// NewLattice makes a lattice without labels. Where the map's box, twice over, is
// small enough its points are kept in an array of at most 8 MB; others in a table
// of about 100 bytes a point.
func NewLattice(m *deterministic.Map) *Lattice {
	l := &Lattice{m: m, rows: newRows(m)}
	points := int64(1)
	for i, h := range m.High {
		width := 2*h*m.Network.Unit(i) + 2
		if !(width < mostDense) {
			points = mostDense + 1
			break
		}
		l.size = append(l.size, int64(width))
		if points *= int64(width); points > mostDense {
			break
		}
	}
	if points <= mostDense {
		l.dense = make([]atomic.Int32, points)
	}
	for i := range l.far {
		l.far[i].labels = map[string]int32{}
	}
	return l
}

// Label gives the index in Map.Stable() of the state whose basin the counts, one a
// species, lie in. It is not ok where they lie in none: on a separatrix, off the
// map's conserved totals, or below 0.
func (l *Lattice) Label(counts []int64) (state int, ok bool) {
	v := l.lookUp(counts)
	return int(v) - 1, v > 0
}

func (l *Lattice) lookUp(counts []int64) int32 {
	if i := l.index(counts); i >= 0 {
		v := l.dense[i].Load()
		if v == 0 {
			v = l.find(counts)
			l.dense[i].Store(v)
		}
		return v
	}
	var buffer [128]byte
	key := buffer[:0]
	hash := uint64(14695981039346656037)
	for _, k := range counts {
		key = binary.AppendVarint(key, k)
		hash = (hash ^ uint64(k)) * 1099511628211
	}
	s := &l.far[(hash>>32)%shards]
	s.RLock()
	v := s.labels[string(key)]
	s.RUnlock()
	if v == 0 {
		v = l.find(counts)
		s.Lock()
		s.labels[string(key)] = v
		s.Unlock()
	}
	return v
}

// index is the counts' place in the array, or −1.
func (l *Lattice) index(counts []int64) int64 {
	if l.dense == nil {
		return -1
	}
	at := int64(0)
	for i, k := range counts {
		if k < 0 || k >= l.size[i] {
			return -1
		}
		at = at*l.size[i] + k
	}
	return at
}

// find labels the counts by their row or, where that does not tell, by the flow
// from them.
func (l *Lattice) find(counts []int64) int32 {
	if l.rows != nil {
		if v := l.rows.label(counts); v != 0 {
			return v
		}
	}
	s, err := l.m.Basin(l.m.Network.Amounts(nil, counts))
	if err != nil {
		return notLabelled
	}
	return int32(s) + 1
}
