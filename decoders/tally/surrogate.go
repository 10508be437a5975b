package tally

import (
	"fmt"
	"math/bits"
	"math/rand/v2"

	"codeassay/decoders"
)

// surrogate is the scratch of BurstFree.
type surrogate struct {
	owners []uint32 // unit of each event still to be given away
	times  []int64  // ns from the block's start, unit by unit
	first  []int    // place of each unit's first event
	next   []int    // and of its next one
	kinds  []decoders.Kind
}

// BurstFree fills the accumulator with a burst-free surrogate of the full
// ensemble in one span: what the recording would look like if its events were
// isolated spikes and every burst were chance.
//
// All events of all units in the span (halo included) keep their bin, but are
// dealt out anew to the units by a random permutation, each at a uniform time
// within its bin. So the ensemble's event train is kept to the last event, and
// each unit keeps its number of events; but a unit's own train loses its dead
// time and its bursts, and becomes nearly Poisson with the ensemble's rate
// profile. Each unit's train is then labelled by its rule, as if it were a
// trial of its own: every burst it has is one of chance. The unit's burst share
// p̄ is the one expected of a Poisson train with its event rate over the
// recording (ChanceTotals).
//
// The same state of rng gives the same surrogate. Unless a rule looks further
// than the halo, cutting the train off at the span's ends does not matter.
func (s *Store) BurstFree(a *Accumulator, span int, rng *rand.Rand, rules []decoders.BurstRule) {
	if len(rules) != len(s.totals) {
		panic(fmt.Sprintf("tally: %d burst rules for %d units", len(rules), len(s.totals)))
	}
	a.Reset(span)
	a.deal(rng)
	clear(a.words)
	for unit := range rules {
		times := a.free.times[a.free.first[unit]:a.free.next[unit]]
		if len(times) == 0 {
			continue
		}
		a.free.kinds = rules[unit].Label(a.free.kinds, times)
		_, share := s.chance(unit, rules[unit], s.seconds)
		by := increments(share)
		for i, t := range times {
			w := &a.words[s.divide.quotient(t)]
			d := &by[a.free.kinds[i]&7]
			w[0] += d[0]
			w[1] += d[1]
		}
	}
}

// deal gives the block's events to its units at random. It leaves each unit's
// times in order, and the number of events of each bin in the words.
func (a *Accumulator) deal(rng *rand.Rand) {
	f, b := &a.free, a.block
	f.owners, f.first = f.owners[:0], f.first[:0]
	for unit := range b.units {
		f.first = append(f.first, len(f.owners))
		for page := range b.pages() {
			at := b.groups(page, unit)
			words := a.words[page*pageBins:]
			for _, bin := range b.spikes[at[1]:at[kindCount]] {
				words[bin][0]++
				f.owners = append(f.owners, uint32(unit))
			}
		}
	}
	n := len(f.owners)
	if cap(f.times) < n {
		f.times = make([]int64, n+n/8)
	}
	f.times = f.times[:n]
	f.next = append(f.next[:0], f.first...)

	// Bins in order, and for each event an owner drawn from those that remain
	// (Durstenfeld 1964): every unit's times come out sorted but for events in
	// one and the same bin.
	owners, left := f.owners, 0
	for bin := range a.words {
		start := int64(bin) * a.store.binNs
		for range a.words[bin][0] {
			// One random word serves both draws: its product with the number
			// that remain has the choice in the upper half and, to within 2⁻³²,
			// an independent uniform fraction in the lower one.
			choice, fraction := bits.Mul64(rng.Uint64(), uint64(n-left))
			within, _ := bits.Mul64(fraction, uint64(a.store.binNs))
			unit := owners[left+int(choice)]
			owners[left+int(choice)] = owners[left]
			left++

			at := f.next[unit]
			f.next[unit]++
			t := start + int64(within)
			for ; at > f.first[unit] && f.times[at-1] > t; at-- {
				f.times[at] = f.times[at-1]
			}
			f.times[at] = t
		}
	}
}

// ChanceTotals are the counts to expect of a unit's burst-free surrogate over the
// recording of the given length in s: a Poisson train with as many spikes as the
// unit has events, labelled by the rule.
func (s *Store) ChanceTotals(unit int, rule decoders.BurstRule, seconds float64) Totals {
	t, _ := s.chance(unit, rule, seconds)
	return t
}

// chance is ChanceTotals with the burst share in 1/shareOne.
func (s *Store) chance(unit int, rule decoders.BurstRule, seconds float64) (Totals, uint32) {
	spikes := s.totals[unit].EventCount()
	t := Totals{Spikes: spikes}
	if spikes > 0 {
		for i, share := range rule.ChanceEvents(spikes / seconds) {
			t.Events[i] = spikes * share
		}
	}
	return t.withShare()
}
