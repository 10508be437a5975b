package sweep

import (
	"codeassay/bench"
	"codeassay/decoders/tally"
	"codeassay/estimators/seed"
)

// snapshot is one ensemble to be measured: how its codes are read, and what has
// been summed of it so far, block by block.
type snapshot struct {
	of    ensemble
	means []float64 // counts a bin, by linear signal: removed once over the recording
	base  []float64 // baseline, by ratio signal

	sums    [][]sums      // method, block
	windows [][][]float64 // window plan, code, window
	drift   []float64     // of the pilot: spikes by stretch of the recording
}

// jobKind says how a job visits a span.
type jobKind uint8

const (
	// nested adds units in order, with a snapshot after each of the marks.
	nested jobKind = iota
	// deletions measures the ensemble of all listed units, then the same with
	// each group of them left out.
	deletions
	// chance measures the burst-free surrogate of the full ensemble.
	chance
)

// job is one visit of every span: a draw with all its sizes, the deletion of
// cell groups at one size, or the surrogate.
type job struct {
	kind      jobKind
	draw      int
	units     []int // in the order in which they are added
	sizes     []int // into Layout.Sizes, by snapshot; the one size of deletions
	groups    int   // of deletions: unit i of units is in group i mod groups
	snapshots []snapshot
	surrogate seed.Seed
}

// newSnapshot prepares to measure the given units. counts, where not nil,
// replaces the recorded counts of the ensemble (the surrogate's are its own).
func (p *plan) newSnapshot(counts tally.Totals, cells int) snapshot {
	trains := counts.Trains()
	seconds := p.totalS()
	snap := snapshot{of: ensemble{cells: cells, spikesPerS: trains[0] / seconds,
		eventsPerS: (trains[1] + trains[2] + trains[3] + trains[4]) / seconds}}
	bins := seconds / p.bin
	for _, w := range p.codes.linear {
		mean := 0.0
		for i, v := range w {
			mean += v * trains[i]
		}
		snap.means = append(snap.means, mean/bins)
	}
	for _, c := range p.codes.ratios {
		code := p.codes.codes[c]
		num, den := 0.0, 0.0
		for i := range code.Weights {
			num += code.Weights[i] * trains[1+i]
			den += code.Over[i] * trains[1+i]
		}
		if den == 0 {
			den = 1
		}
		snap.base = append(snap.base, num/den)
	}
	snap.sums = make([][]sums, len(p.methods))
	for e, m := range p.methods {
		if !m.info.Spectral {
			continue
		}
		snap.sums[e] = make([]sums, len(p.blocks))
		for j := range snap.sums[e] {
			snap.sums[e][j] = p.newCodeSums(e)
		}
	}
	for _, w := range p.windows {
		values := make([][]float64, p.codes.shown)
		for c := range values {
			values[c] = make([]float64, w.total)
		}
		snap.windows = append(snap.windows, values)
	}
	return snap
}

// snapshotBytes is the memory of one snapshot, from which batches are sized.
func (p *plan) snapshotBytes() int {
	bytes := 0
	for _, m := range p.methods {
		if m.info.Spectral {
			codes := len(p.codes.codes)
			bytes += len(p.blocks) * m.design.Bins() * (8*codes + 16*(codes*len(p.streams)+len(p.codes.pairs)))
		}
	}
	for _, w := range p.windows {
		bytes += 8 * p.codes.shown * w.total
	}
	return bytes
}

// nestedJob is one draw: its units in order and a snapshot for each size.
func (p *plan) nestedJob(store *tally.Store, draw int, units, sizes []int) *job {
	j := &job{kind: nested, draw: draw, units: units, sizes: sizes}
	var counts tally.Totals
	next := 0
	for i, u := range units {
		counts = counts.Add(store.Totals(u))
		if next < len(sizes) && p.layout.Sizes[sizes[next]] == i+1 {
			j.snapshots = append(j.snapshots, p.newSnapshot(counts, i+1))
			next++
		}
	}
	return j
}

// deletionJob measures one size of a draw, whole and with each group of cells
// left out.
func (p *plan) deletionJob(store *tally.Store, units []int, size, groups int) *job {
	n := p.layout.Sizes[size]
	j := &job{kind: deletions, units: units[:n], sizes: []int{size}, groups: groups}
	for g := -1; g < groups; g++ {
		var counts tally.Totals
		cells := 0
		for i, u := range j.units {
			if g < 0 || i%groups != g {
				counts = counts.Add(store.Totals(u))
				cells++
			}
		}
		j.snapshots = append(j.snapshots, p.newSnapshot(counts, cells))
	}
	return j
}

// piece turns a finished nested job into the piece that is kept.
func (p *plan) piece(j *job, values []bench.Values) bench.Piece {
	out := bench.Piece{Draw: j.draw, Sizes: j.sizes, Value: values}
	for _, s := range j.snapshots {
		out.SpikesPerS = append(out.SpikesPerS, s.of.spikesPerS)
		out.EventsPerS = append(out.EventsPerS, s.of.eventsPerS)
	}
	return out
}
