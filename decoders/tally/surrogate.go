package tally

import (
	"fmt"
	"math/bits"
	"math/rand/v2"
	"slices"

	"codeassay/decoders"
)

// surrogate is the scratch of BurstFree.
type surrogate struct {
	owners  []uint32 // unit of each event still to be dealt out
	moments []uint32 // unit by unit, bin and fraction of the bin of each event
	parts   int      // bits of the fraction: what the bins leave of 32, up to finest
	first   []int    // place of each unit's first event
	next    []int    // and of its next one
	times   []int64  // of one unit
	kinds   []decoders.Kind
}

// finest is the most bits of a fraction of a bin: a millionth of it is fine
// enough, and its product with any sensible width of bins fits 63 bits.
const finest = 20

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
// In a recording without bursts of its own, in which the spikes within bursts are
// no more than chance makes them (up to half as many again), these are events as
// well that only chance has joined: then all spikes are dealt out, and the
// surrogate shows what the data show.
//
// The same state of rng gives the same surrogate. Where a rule looks further than
// the halo, spikes within that reach of the span's ends are labelled as at the
// ends of a trial.
func (s *Store) BurstFree(a *Accumulator, span int, rng *rand.Rand, rules []decoders.BurstRule) {
	if len(rules) != len(s.totals) {
		panic(fmt.Sprintf("tally: %d burst rules for %d units", len(rules), len(s.totals)))
	}
	a.Reset(span)
	a.deal(rng)
	clear(a.words)
	f := &a.free
	for unit := range rules {
		f.kinds = rules[unit].Label(f.kinds, f.timesOf(unit, s.binNs))
		_, share := s.chance(unit, rules[unit], s.seconds)
		by := increments(share)
		moments := f.moments[f.first[unit]:f.next[unit]]
		for i, kind := range f.kinds[:len(moments)] {
			w := &a.words[moments[i]>>f.parts]
			d := &by[kind&7]
			w[0] += d[0]
			w[1] += d[1]
		}
	}
}

// deal gives the block's events to its units at random. It leaves each unit's
// moments in order, and the number of events of each bin in the words.
func (a *Accumulator) deal(rng *rand.Rand) {
	f, b := &a.free, a.block
	from := 1 // kinds from the first event on
	if a.store.byChance {
		from = 0
	}
	f.owners, f.first = f.owners[:0], f.first[:0]
	for unit := range b.units {
		f.first = append(f.first, len(f.owners))
		for page := range b.pages() {
			at := b.groups(page, unit)
			words := a.words[page*pageBins:]
			events := b.spikes[at[from]:at[kindCount]]
			for _, bin := range events {
				words[bin][0]++
			}
			have := len(f.owners)
			f.owners = slices.Grow(f.owners, len(events))[:have+len(events)]
			for i := range f.owners[have:] {
				f.owners[have+i] = uint32(unit)
			}
		}
	}
	n := len(f.owners)
	if cap(f.moments) < n {
		f.moments = make([]uint32, n+n/8)
	}
	f.moments = f.moments[:n]
	f.parts = min(32-bits.Len(uint(len(a.words))), finest)
	f.next = append(f.next[:0], f.first...)

	// Bins in order, and for each event an owner drawn from those that remain
	// (Durstenfeld 1964): every unit's moments come out in order but for those
	// in one and the same bin.
	owners, moments, next := f.owners, f.moments, f.next
	parts := f.parts
	left := 0
	for bin := range a.words {
		for range a.words[bin][0] {
			// One random word serves both draws: its product with the number
			// that remains has the choice in the upper half and, to within 2⁻³²,
			// an independent uniform fraction in the lower one.
			choice, fraction := bits.Mul64(rng.Uint64(), uint64(n-left))
			chosen := &owners[left+int(choice)]
			unit := *chosen
			*chosen = owners[left]
			left++
			moments[next[unit]] = uint32(bin)<<parts | uint32(fraction>>(64-parts))
			next[unit]++
		}
	}
	for unit := range f.first {
		sortNearly(moments[f.first[unit]:next[unit]])
	}
}

// sortNearly sorts what is all but sorted.
func sortNearly(x []uint32) {
	for i := 1; i < len(x); i++ {
		v := x[i]
		j := i
		for ; j > 0 && x[j-1] > v; j-- {
			x[j] = x[j-1]
		}
		x[j] = v
	}
}

// timesOf are the surrogate's spikes of a unit in ns from the block's start.
func (f *surrogate) timesOf(unit int, binNs int64) []int64 {
	moments := f.moments[f.first[unit]:f.next[unit]]
	f.times = f.times[:0]
	for _, m := range moments {
		within := int64(m&(1<<f.parts-1)) * binNs >> f.parts
		f.times = append(f.times, int64(m>>f.parts)*binNs+within)
	}
	return f.times
}

// ChanceTotals are the counts to expect of a unit's burst-free surrogate over the
// recording of the given length in s: a Poisson train with as many spikes as the
// unit is dealt, labelled by the rule.
func (s *Store) ChanceTotals(unit int, rule decoders.BurstRule, seconds float64) Totals {
	t, _ := s.chance(unit, rule, seconds)
	return t
}

// chance is ChanceTotals with the burst share in 1/shareOne.
func (s *Store) chance(unit int, rule decoders.BurstRule, seconds float64) (Totals, uint32) {
	spikes := s.totals[unit].EventCount()
	if s.byChance {
		spikes = s.totals[unit].Spikes
	}
	t := Totals{Spikes: spikes}
	if spikes > 0 {
		for i, share := range rule.ChanceEvents(spikes / seconds) {
			t.Events[i] = spikes * share
		}
	}
	return t.withShare()
}

// compareWithChance settles whether the recording's bursts may all be chance: the
// spikes within them are at most 1.5 times as many as Poisson trains with the
// units' event rates have. Half as many again leaves room for rates that are
// modulated, which makes short intervals likelier.
func (s *Store) compareWithChance(rules []decoders.BurstRule) {
	if s.seconds == 0 {
		return
	}
	found, expected := 0.0, 0.0
	for unit, t := range s.totals {
		events := t.EventCount()
		found += t.Spikes - events
		if events > 0 {
			expected += rules[unit].PoissonRate(events/s.seconds)*s.seconds - events
		}
	}
	s.byChance = found <= 1.5*expected
}
