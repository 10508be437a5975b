// Package seed is the only source of randomness: an explicit seed with named
// children. A child depends on its ancestors' names and numbers alone, so a row
// of a result depends on its settings alone, never on the order of workers, on
// the machine, or on what else was drawn.
package seed

import (
	"encoding/binary"
	"hash/fnv"
	"math/rand/v2"
)

// Seed is a comparable value. There is no default: New asks for a number.
type Seed struct{ hi, lo uint64 }

// New is the root seed of a study.
func New(n uint64) Seed { return Seed{lo: n}.Child("codeassay") }

// Child is the seed of a named part, and of the part's index-th instance: a hash
// (FNV-1a, 128 bits) of the parent, the name and the indices.
func (s Seed) Child(name string, index ...int) Seed {
	h := fnv.New128a()
	var word [8]byte
	put := func(v uint64) {
		binary.LittleEndian.PutUint64(word[:], v)
		h.Write(word[:]) // a hash's Write never fails
	}
	put(s.hi)
	put(s.lo)
	put(uint64(len(name)))
	h.Write([]byte(name))
	for _, i := range index {
		put(uint64(int64(i)))
	}
	sum := h.Sum(nil)
	return Seed{hi: binary.BigEndian.Uint64(sum), lo: binary.BigEndian.Uint64(sum[8:])}
}

// Rand is a fresh generator at the seed's start: PCG of 128 bits (O'Neill 2014,
// Harvey Mudd College HMC-CS-2014-0905). Every call starts anew.
func (s Seed) Rand() *rand.Rand { return rand.New(rand.NewPCG(s.hi, s.lo)) }

// Perm fills dst with a random permutation of 0 … n−1; a nil dst is allocated. It
// panics if dst has another length.
func (s Seed) Perm(dst []int, n int) []int {
	if dst == nil {
		dst = make([]int, n)
	}
	if len(dst) != n {
		panic("seed: Perm needs dst of n values")
	}
	for i := range dst {
		dst[i] = i
	}
	s.Rand().Shuffle(n, func(i, j int) { dst[i], dst[j] = dst[j], dst[i] })
	return dst
}
