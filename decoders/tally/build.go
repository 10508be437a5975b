package tally

import (
	"context"
	"fmt"
	"math"
	"slices"
	"sync"
	"sync/atomic"

	"codeassay/decoders"
)

// Build labels every train of src, by its unit's rule or by the user's own
// labels, and files the spikes of the spans. Spans are in order of trial and
// bin, and disjoint; the bins of a span exist in its trial.
//
// Trains are read twice, to count and to file, so that nothing is copied; the
// store takes 2 bytes a spike and 20 bytes a span and unit.
//
// An error names the unit whose labels do not fit, or a bin that holds more
// spikes than can be counted. Build panics where spans or rules do not fit the
// recording.
func Build(ctx context.Context, src Source, rules []decoders.BurstRule, spans []Span, o Options) (*Store, error) {
	b := newBuilder(src, rules, spans, o)
	if err := b.pass(ctx, (*labeller).count); err != nil {
		return nil, err
	}
	if err := b.allocate(); err != nil {
		return nil, err
	}
	if err := b.pass(ctx, (*labeller).file); err != nil {
		return nil, err
	}
	if err := b.checkCounts(ctx); err != nil {
		return nil, err
	}
	b.store.compareWithChance(rules)
	return b.store, nil
}

type builder struct {
	src     Source
	rules   []decoders.BurstRule
	workers int
	units   int
	trials  int
	inTrial [][2]int // spans of each trial: first, end
	store   *Store
}

func newBuilder(src Source, rules []decoders.BurstRule, spans []Span, o Options) *builder {
	trials := src.Trials()
	b := &builder{src: src, rules: rules, workers: max(1, o.Workers), units: len(src.Units()), trials: len(trials)}
	if len(rules) != b.units {
		panic(fmt.Sprintf("tally: %d burst rules for %d units", len(rules), b.units))
	}
	if o.BinNs <= 0 || o.HaloBins < 0 {
		panic(fmt.Sprintf("tally: bins of %d ns with a halo of %d", o.BinNs, o.HaloBins))
	}
	s := &Store{binNs: o.BinNs, divide: newDivider(o.BinNs), halo: o.HaloBins, spans: slices.Clone(spans),
		blocks: make([]block, len(spans)), totals: make([]Totals, b.units), share: make([]uint32, b.units)}
	b.store = s
	b.inTrial = make([][2]int, len(trials))
	whole := 0
	for _, t := range trials {
		whole += int(t.Duration / o.BinNs)
	}
	s.seconds = float64(whole) * (float64(o.BinNs) * 1e-9)
	for i, span := range spans {
		if span.Trial < 0 || span.Trial >= len(trials) || span.First < 0 || span.Bins <= 0 {
			panic(fmt.Sprintf("tally: span %+v of a recording with %d trials", span, len(trials)))
		}
		if i > 0 && (span.Trial < spans[i-1].Trial || span.Trial == spans[i-1].Trial && span.First < spans[i-1].end()) {
			panic(fmt.Sprintf("tally: span %+v after %+v: spans are in order and disjoint", span, spans[i-1]))
		}
		// A last bin that the trial does not fill holds spikes all the same.
		bins := int((trials[span.Trial].Duration + o.BinNs - 1) / o.BinNs)
		if span.end() > bins {
			panic(fmt.Sprintf("tally: span %+v of a trial of %d bins", span, bins))
		}
		blk := block{low: span.First - o.HaloBins, high: span.end() + o.HaloBins, units: b.units}
		blk.start = make([]uint32, blk.pages()*b.units*kindCount+1)
		s.blocks[i] = blk
		s.longest = max(s.longest, blk.bins())
		at := &b.inTrial[span.Trial]
		if at[1] == 0 {
			at[0] = i
		}
		at[1] = i + 1
	}
	return b
}

// labeller is the scratch of one worker.
type labeller struct {
	*builder
	train []int64
	kinds []decoders.Kind
}

// pass calls do for every unit. Units write to places of their own, so the order
// does not matter; the first unit's error is returned.
func (b *builder) pass(ctx context.Context, do func(l *labeller, unit int) error) error {
	errs := make([]error, b.workers)
	failed := make([]int, b.workers)
	var next atomic.Int64
	var wait sync.WaitGroup
	for w := range b.workers {
		wait.Go(func() {
			l := &labeller{builder: b}
			for ctx.Err() == nil {
				unit := int(next.Add(1)) - 1
				if unit >= b.units {
					return
				}
				if err := do(l, unit); err != nil {
					// Units are handed out in order: no later one can come first.
					errs[w], failed[w] = err, unit
					return
				}
			}
		})
	}
	wait.Wait()
	if ctx.Err() != nil {
		return ctx.Err()
	}
	first := -1
	for w, err := range errs {
		if err != nil && (first < 0 || failed[w] < failed[first]) {
			first = w
		}
	}
	if first >= 0 {
		return errs[first]
	}
	return nil
}

// label is the train of a unit in a trial and what its spikes are.
func (l *labeller) label(unit, trial int) ([]int64, []decoders.Kind, error) {
	// The source may return memory of its own, which must not become scratch.
	times := l.src.Train(l.train[:0], unit, trial)
	if cap(l.train) < len(times) {
		l.train = make([]int64, 0, len(times)+len(times)/4)
	}
	labels := l.src.Labels(unit, trial)
	if labels == nil {
		l.kinds = l.rules[unit].Label(l.kinds, times)
		return times, l.kinds, nil
	}
	where := l.src.Units()[unit].Name
	if l.trials > 1 {
		where = fmt.Sprintf("%s, trial %d", where, trial+1)
	}
	if len(labels) != len(times) {
		return nil, nil, fmt.Errorf("unit %s: %d event labels for %d spikes", where, len(labels), len(times))
	}
	kinds, err := decoders.LabelsToKinds(l.kinds, labels)
	if err != nil {
		return nil, nil, fmt.Errorf("unit %s: %w", where, err)
	}
	l.kinds = kinds
	return times, kinds, nil
}

// eachPage calls do for every page of the trial's blocks that has spikes in
// times: the page's first bin in the trial, and its first and end spike.
func (l *labeller) eachPage(trial int, times []int64, do func(b *block, page int, first, end int, low int64)) {
	binNs := l.store.binNs
	spans := l.inTrial[trial]
	from := 0
	for i := spans[0]; i < spans[1]; i++ {
		b := &l.store.blocks[i]
		for page := range b.pages() {
			low := int64(b.low+page*pageBins) * binNs
			high := min(int64(b.low+(page+1)*pageBins), int64(b.high)) * binNs
			// Halos overlap, so a page may begin before the last one ended, but
			// not before that one began.
			first, _ := slices.BinarySearch(times[from:], low)
			first += from
			count, _ := slices.BinarySearch(times[first:], high)
			do(b, page, first, first+count, low)
			from = first
		}
	}
}

// count counts a unit's spikes, over the recording and by group.
func (l *labeller) count(unit int) error {
	var all [kindCount]int
	for trial := range l.trials {
		times, kinds, err := l.label(unit, trial)
		if err != nil {
			return err
		}
		n := countKinds(kinds)
		for k := range all {
			all[k] += n[k]
		}
		l.eachPage(trial, times, func(b *block, page, first, end int, _ int64) {
			at := (page*b.units+unit)*kindCount + 1
			for k, c := range countKinds(kinds[first:end]) {
				b.start[at+k] = uint32(c)
			}
		})
	}
	t := Totals{}
	for k, c := range all {
		t.Spikes += float64(c)
		if k > 0 {
			t.Events[k-1] = float64(c)
		}
	}
	l.store.totals[unit], l.store.share[unit] = t.withShare()
	return nil
}

// countKinds counts spikes by kind, in five 12-bit fields of one word.
func countKinds(kinds []decoders.Kind) (n [kindCount]int) {
	const field, full = 12, 1<<12 - 1
	for len(kinds) > 0 {
		some := kinds[:min(len(kinds), full)]
		kinds = kinds[len(some):]
		packed := uint64(0)
		for _, k := range some {
			packed += 1 << (k * field & 63)
		}
		for k := range n {
			n[k] += int(packed >> (k * field) & full)
		}
	}
	return n
}

// allocate turns the counts of every block into places.
func (b *builder) allocate() error {
	for i := range b.store.blocks {
		blk := &b.store.blocks[i]
		sum := uint64(0)
		for j, n := range blk.start {
			sum += uint64(n)
			blk.start[j] = uint32(sum)
		}
		if sum > math.MaxUint32 {
			return fmt.Errorf("a block of %d bins holds %d spikes, more than can be filed: use shorter segments", b.store.spans[i].Bins, sum)
		}
		blk.spikes = make([]uint16, sum)
	}
	return nil
}

// file puts a unit's spikes in their places.
func (l *labeller) file(unit int) error {
	divide := l.store.divide
	for trial := range l.trials {
		times, kinds, err := l.label(unit, trial)
		if err != nil {
			return err
		}
		l.eachPage(trial, times, func(b *block, page, first, end int, low int64) {
			var place [8]uint32 // by kind; the length spares the bounds check
			copy(place[:kindCount], b.groups(page, unit)[:])
			some := kinds[first:end]
			for i, t := range times[first:end] {
				k := some[i] & 7
				b.spikes[place[k]] = uint16(divide.quotient(t - low))
				place[k]++
			}
		})
	}
	return nil
}

// checkCounts finds the most spikes that any bin holds, which must fit the
// packed counters.
func (b *builder) checkCounts(ctx context.Context) error {
	s := b.store
	at := make([]int, len(s.blocks))
	var next atomic.Int64
	var wait sync.WaitGroup
	for range b.workers {
		wait.Go(func() {
			counts := make([]uint32, s.longest)
			for ctx.Err() == nil {
				i := int(next.Add(1)) - 1
				if i >= len(s.blocks) {
					return
				}
				s.blocks[i].most, at[i] = s.blocks[i].fullest(counts)
			}
		})
	}
	wait.Wait()
	if ctx.Err() != nil {
		return ctx.Err()
	}
	for i := range s.blocks {
		if n := s.blocks[i].most; n > maxCount {
			start := float64(s.blocks[i].low+at[i]) * float64(s.binNs) * 1e-9
			return fmt.Errorf("the bin of %g ms at %g s of trial %d holds %d spikes, more than the %d that can be counted: use narrower bins ([sweep] bin_ms)",
				float64(s.binNs)/1e6, start, s.spans[i].Trial+1, n, maxCount)
		}
	}
	return nil
}

// fullest is the highest count of all units' spikes in a bin, and the first bin
// that has it. counts is scratch of at least the block's length.
func (b *block) fullest(counts []uint32) (most, at int) {
	counts = counts[:b.bins()]
	clear(counts)
	for page := range b.pages() {
		first := b.start[page*b.units*kindCount]
		end := b.start[(page+1)*b.units*kindCount]
		in := counts[page*pageBins:]
		for _, bin := range b.spikes[first:end] {
			in[bin]++
		}
	}
	for bin, n := range counts {
		if int(n) > most {
			most, at = int(n), bin
		}
	}
	return most, at
}
