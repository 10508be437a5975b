package tally

import "fmt"

// Accumulator adds units up within one span. It is the scratch of one worker,
// made by NewAccumulator and reused from span to span.
//
// A bin is two words of packed counters, in one cache line: 16 bits each of
// spikes and events of 1, 2 and 3 spikes; then 16 bits of events of ≥ 4 spikes,
// 16 unused and 32 of Σ p̄ᵢEᵢ with 16 fractional bits. Build has made sure that
// nothing overflows.
type Accumulator struct {
	store *Store
	span  int
	block *block
	all   [][2]uint64 // as long as the longest block
	words [][2]uint64 // of the span, halo included
	free  surrogate
}

// Positions of the counters in their words.
const (
	fieldBits   = 16
	fieldMask   = 1<<fieldBits - 1
	shareOffset = 32
)

// increments are what a spike of each kind adds, for a unit with burst share p̄.
func increments(share uint32) [8][2]uint64 {
	own := uint64(share) << shareOffset
	return [8][2]uint64{
		{1, 0},
		{1 | 1<<fieldBits, own},
		{1 | 1<<(2*fieldBits), own},
		{1 | 1<<(3*fieldBits), own},
		{1, own | 1},
	}
}

// NewAccumulator returns an accumulator that holds nothing: Reset it to a span.
func (s *Store) NewAccumulator() *Accumulator {
	return &Accumulator{store: s, span: -1, all: make([][2]uint64, s.longest)}
}

// Reset empties the accumulator and turns it to a span, by index.
func (a *Accumulator) Reset(span int) {
	a.span = span
	a.block = a.store.load(span)
	a.words = a.all[:a.block.bins()]
	clear(a.words)
}

// Add adds a unit's spikes in the span. A unit is added once.
func (a *Accumulator) Add(unit int) {
	by := increments(a.store.share[unit])
	b := a.block
	for page := range b.pages() {
		words := a.words[page*pageBins:]
		at := b.groups(page, unit)
		for _, bin := range b.spikes[at[0]:at[1]] {
			words[bin][0]++
		}
		for k := 1; k < kindCount; k++ {
			first, second := by[k][0], by[k][1]
			for _, bin := range b.spikes[at[k]:at[k+1]] {
				w := &words[bin]
				w[0] += first
				w[1] += second
			}
		}
	}
}

// Copy makes the accumulator hold what other holds.
func (a *Accumulator) Copy(other *Accumulator) {
	if a.store != other.store {
		panic("tally: Copy from an accumulator of another store")
	}
	a.span, a.block = other.span, other.block
	a.words = a.all[:len(other.words)]
	copy(a.words, other.words)
}

// Sub takes away what other holds: units that are all in the accumulator.
func (a *Accumulator) Sub(other *Accumulator) {
	if a.store != other.store || a.span != other.span {
		panic(fmt.Sprintf("tally: Sub of span %d from span %d", other.span, a.span))
	}
	from := a.words
	for i, w := range other.words[:len(from)] {
		from[i][0] -= w[0]
		from[i][1] -= w[1]
	}
}

// inner are the words of the span's own bins, without halo.
func (a *Accumulator) inner() [][2]uint64 {
	return a.words[a.store.halo:][:a.store.spans[a.span].Bins]
}
