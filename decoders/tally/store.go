package tally

import (
	"codeassay/decoders"
	"codeassay/scenarios"
)

// Source is the part of a recording that is tallied. It must be safe for
// concurrent use.
type Source interface {
	Units() []scenarios.Unit
	Trials() []scenarios.Trial
	// Train is the spike times of a unit in a trial in ns, sorted, in
	// [0, duration). It may use dst, or return memory of its own, which is not
	// changed.
	Train(dst []int64, unit, trial int) []int64
	// Labels are the user's own labels of the train, nil where there are none.
	Labels(unit, trial int) []scenarios.EventLabel
}

// Span is the bins [First, First+Bins) of one trial. A spike at t ns is in bin
// t/BinNs of its trial, in integer arithmetic.
type Span struct {
	Trial, First, Bins int
}

// end is the bin after the last.
func (s Span) end() int { return s.First + s.Bins }

// Options of Build.
type Options struct {
	BinNs    int64 // width of a bin in ns, above 0
	HaloBins int   // bins on either side of a span that sliding windows may reach into
	Workers  int   // goroutines; 0 is 1
}

// maxCount is what a 16-bit count holds.
const maxCount = 1<<16 - 1

// shareOne is a burst share p̄ of 1 in fixed point: shares are rounded to
// multiples of 1/65536 so that sums of them are exact.
const shareOne = 1 << 16

// Store holds the labelled spikes of a recording, by span. It is read-only once
// built, and may be shared.
type Store struct {
	binNs   int64
	divide  divider
	halo    int
	seconds float64 // whole bins of all trials
	spans   []Span
	blocks  []block
	totals  []Totals // by unit, over the whole recording
	share   []uint32 // by unit: p̄ in units of 1/shareOne
	longest int      // bins of the longest block
	// byChance: the recording has no more spikes within bursts than chance
	// explains, so the surrogate is made of all its spikes (see BurstFree).
	byChance bool
}

// block is the spikes of one span with its halo. Bins count from low.
type block struct {
	low, high int // bins of the trial, halo included: those beyond it are empty
	units     int
	most      int // most spikes of all units in any one bin
	// spikes are bins, counted from the start of their page; those of each page,
	// unit and kind lie together, in time order.
	spikes []uint16
	// start indexes spikes: entry (page·units + unit)·kindCount + kind is the
	// first of the group, the next entry its end.
	start []uint32
}

// A page is the bins that 16 bits address.
const pageBins = 1 << 16

const kindCount = int(decoders.Longest) + 1

func (b *block) bins() int  { return b.high - b.low }
func (b *block) pages() int { return (b.bins() + pageBins - 1) / pageBins }

// groups are the bounds in spikes of a unit's kinds in a page.
func (b *block) groups(page, unit int) *[kindCount + 1]uint32 {
	at := (page*b.units + unit) * kindCount
	return (*[kindCount + 1]uint32)(b.start[at : at+kindCount+1])
}

// load gives access to the block of a span. It is safe for concurrent use.
func (s *Store) load(span int) *block { return &s.blocks[span] }

// Totals are the counts of a unit over the whole recording, spans or not.
func (s *Store) Totals(unit int) Totals { return s.totals[unit] }

// Totals counts spikes and events. Expected counts may be fractions.
type Totals struct {
	Spikes float64
	Events [4]float64 // of 1, 2, 3 and ≥ 4 spikes
	// Own is Σ p̄ᵢEᵢ: the events, weighted by their unit's own burst share p̄ᵢ
	// (bursts over events, 0 without events, rounded to 1/65536).
	Own float64
}

// Add is the sum of two counts.
func (t Totals) Add(o Totals) Totals {
	t.Spikes += o.Spikes
	for i := range t.Events {
		t.Events[i] += o.Events[i]
	}
	t.Own += o.Own
	return t
}

// EventCount is the number of events of any size.
func (t Totals) EventCount() float64 { return t.Events[0] + t.BurstCount() }

// BurstCount is the number of events of two or more spikes.
func (t Totals) BurstCount() float64 { return t.Events[1] + t.Events[2] + t.Events[3] }

// Trains are the counts of the six basic trains, in the order of code weights.
func (t Totals) Trains() [decoders.Trains]float64 {
	return [...]float64{t.Spikes, t.Events[0], t.Events[1], t.Events[2], t.Events[3], t.Own}
}

// withShare sets the burst share in 1/shareOne and what follows from it.
func (t Totals) withShare() (Totals, uint32) {
	share := uint32(0)
	if events := t.EventCount(); events > 0 {
		share = uint32(t.BurstCount()/events*shareOne + 0.5)
	}
	t.Own = float64(share) / shareOne * t.EventCount()
	return t, share
}
