package inspect

import (
	"math"
	"sort"

	"github.com/montanaflynn/stats"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/estimators/stationarity"
	"codeassay/scenarios"
)

// refractory in ns: a cell cannot spike twice within it (1 ms is common
// practice, no source).
const refractory = 1e6

// binsPerDecade of the interval histogram.
const binsPerDecade = 10

// reader sums what the trains say.
type reader struct {
	src     bench.Source
	rules   []decoders.BurstRule
	bursts  bench.BurstsPart
	edges   []int64 // of the interval histogram, ns
	counts  []int64 // by bin
	units   []Unit
	sizes   [4]int64
	sums    []intervalSums
	stretch int64       // ns, that drift is looked for between; 0: whole trials
	starts  []int64     // of each trial on the joined clock, ns
	total   int64       // ns
	over    [][]float64 // unit, stretch: spikes
	kinds   []decoders.Kind
}

// intervalSums are the moments of a unit's intervals in ms.
type intervalSums struct{ n, sum, squares float64 }

func newReader(src bench.Source, rules []decoders.BurstRule, bursts bench.BurstsPart, stretches int) *reader {
	r := &reader{src: src, rules: rules, bursts: bursts}
	for _, t := range src.Trials() {
		r.starts = append(r.starts, r.total)
		r.total += t.Duration
	}
	if src.Meaning() == scenarios.FrozenRepeats {
		stretches = len(src.Trials())
	} else {
		r.stretch = max(1, r.total/int64(stretches))
	}
	for _, u := range src.Units() {
		r.units = append(r.units, Unit{Unit: u.Name})
		r.over = append(r.over, make([]float64, stretches))
	}
	for i := range r.units {
		r.units[i].maxISI = rules[i].MaxISI
	}
	r.sums = make([]intervalSums, len(r.units))
	// Edges from 0.5 ms (or the threshold) to 100 s, the threshold among them.
	threshold := bursts.MaxISIMS * 1e6
	low := math.Ceil(math.Log10(math.Min(0.5e6, threshold)/threshold) * binsPerDecade)
	high := math.Floor(math.Log10(math.Max(1e11, 10*threshold)/threshold) * binsPerDecade)
	for k := low; k <= high; k++ {
		r.edges = append(r.edges, int64(math.Round(threshold*math.Pow(10, k/binsPerDecade))))
	}
	r.counts = make([]int64, len(r.edges)+1)
	return r
}

// train reads one train.
func (r *reader) train(unit, trial int, times []int64) error {
	u := &r.units[unit]
	var err error
	if labels := r.src.Labels(unit, trial); labels != nil {
		r.kinds, err = decoders.LabelsToKinds(r.kinds, labels)
	} else {
		r.kinds = r.rules[unit].Label(r.kinds, times)
	}
	if err != nil {
		return err
	}
	for _, k := range r.kinds[:len(times)] {
		if k == decoders.Inner {
			continue
		}
		u.Events++
		r.sizes[k-1]++
		if k > decoders.Single {
			u.Bursts++
		}
	}
	u.Spikes += len(times)
	over := r.over[unit]
	for i, t := range times {
		at := trial
		if r.stretch > 0 {
			at = min(int((r.starts[trial]+t)/r.stretch), len(over)-1)
		}
		over[at]++
		if i == 0 {
			continue
		}
		isi := t - times[i-1]
		if isi < refractory {
			u.Below1MS++
		}
		r.counts[sort.Search(len(r.edges), func(k int) bool { return isi <= r.edges[k] })]++
		ms := float64(isi) / 1e6
		s := &r.sums[unit]
		s.n++
		s.sum += ms
		s.squares += ms * ms
	}
	return nil
}

// describe files everything about trains in the document.
func (r *reader) describe(doc *Document) {
	seconds := scenarios.Seconds(r.total)
	rec := &doc.Recording
	rec.Cells, rec.Trials, rec.TrialMeaning = len(r.units), len(r.starts), string(r.src.Meaning())
	rec.DurationS, rec.UsedS = bench.Number(seconds), bench.Number(seconds)
	chance := 0.0
	all := make([]float64, len(r.over[0]))
	for i := range r.units {
		u := &r.units[i]
		u.SpikesPerS, u.EventsPerS = bench.Number(float64(u.Spikes)/seconds), bench.Number(float64(u.Events)/seconds)
		u.BurstFraction, u.Chance, u.IntervalCV, u.DriftP = bench.None, bench.None, bench.None, bench.None
		if u.Events > 0 {
			u.BurstFraction = ratio(u.Bursts, u.Events)
			rule := decoders.BurstRule{MaxISI: u.maxISI, MinSpikes: 2}
			u.Chance = bench.Number(decoders.ChanceBurstFraction(rule.PoissonRate(float64(u.EventsPerS)), u.maxISI))
			chance += float64(u.Events) * float64(u.Chance)
		}
		if s := r.sums[i]; s.n >= 2 {
			mean := s.sum / s.n
			u.IntervalCV = bench.Number(math.Sqrt(math.Max(0, s.squares/s.n-mean*mean)) / mean)
		}
		if u.Spikes >= 40 {
			u.DriftP = bench.Number(stationarity.Drift(r.over[i]).PValue)
		}
		rec.Spikes += int64(u.Spikes)
		rec.Events += int64(u.Events)
		rec.Bursts += int64(u.Bursts)
		for k, n := range r.over[i] {
			all[k] += n
		}
	}
	rec.BurstFraction = ratio(int(rec.Bursts), int(rec.Events))
	rec.ChanceBurstFraction = bench.None
	if rec.Events > 0 {
		rec.ChanceBurstFraction = bench.Number(chance / float64(rec.Events))
	}
	doc.Rows = r.units
	doc.Rates = spreads(r.units)
	doc.Sizes = Sizes{r.share(0), r.share(1), r.share(2), r.share(3)}
	doc.Intervals = r.intervals()
	change := stationarity.Drift(all)
	doc.Steadiness = steadiness(change, change.Mean)
	perS := float64(len(all)) / seconds
	for i := range doc.Steadiness.Blocks {
		doc.Steadiness.Blocks[i] *= bench.Number(perS)
	}
}

func ratio(a, b int) bench.Number {
	if b == 0 {
		return bench.None
	}
	return bench.Number(float64(a) / float64(b))
}

func (r *reader) share(size int) bench.Number {
	return ratio(int(r.sizes[size]), int(r.sizes[0]+r.sizes[1]+r.sizes[2]+r.sizes[3]))
}

// spreads summarises units that spike.
func spreads(units []Unit) Rates {
	var out Rates
	var spikes, events, fraction []float64
	for _, u := range units {
		switch u.Spikes {
		case 0:
			out.Silent++
			continue
		case 1:
			out.SingleSpike++
		}
		spikes = append(spikes, float64(u.SpikesPerS))
		events = append(events, float64(u.EventsPerS))
		fraction = append(fraction, float64(u.BurstFraction))
	}
	out.Spikes, out.Events, out.BurstFraction = spread(spikes), spread(events), spread(fraction)
	return out
}

func spread(x []float64) Spread {
	at := func(percent float64) bench.Number {
		v, err := stats.Percentile(x, percent) // quantiles as R's type 7
		if err != nil {
			return bench.None
		}
		return bench.Number(v)
	}
	s := Spread{Min: bench.None, Lower: at(25), Median: at(50), Upper: at(75), Max: at(100)}
	if low, err := stats.Min(x); err == nil {
		s.Min = bench.Number(low)
	}
	return s
}

// intervals is the histogram, cut to the bins that are used.
func (r *reader) intervals() Intervals {
	out := Intervals{Bins: []IntervalBin{}, WithinThreshold: bench.None, ValleyMS: bench.None, Void: bench.None}
	within := int64(0)
	first, last := -1, 0
	threshold := nanoseconds(r.bursts.MaxISIMS)
	for k, n := range r.counts {
		if n > 0 {
			last = k
			if first < 0 {
				first = k
			}
		}
		out.Total += n
		if k < len(r.edges) && r.edges[k] <= threshold {
			within += n
		}
	}
	if out.Total == 0 {
		return out
	}
	out.WithinThreshold = bench.Number(float64(within) / float64(out.Total))
	step := math.Pow(10, 1.0/binsPerDecade)
	for k := first; k <= last; k++ {
		b := IntervalBin{Count: r.counts[k]}
		if k < len(r.edges) {
			b.HighMS = bench.Number(float64(r.edges[k]) / 1e6)
			b.LowMS = b.HighMS / bench.Number(step)
		} else {
			b.LowMS = bench.Number(float64(r.edges[k-1]) / 1e6)
			b.HighMS = b.LowMS * bench.Number(step)
		}
		out.Bins = append(out.Bins, b)
	}
	out.ValleyMS, out.Void = valley(out.Bins)
	return out
}

// valley is the minimum between the two peaks of the histogram of log intervals
// that it separates best, with the void 1 − min/√(peak₁ peak₂): 0.7 or more is a
// clear valley (Pasquale, Martinoia and Chiappalone 2010, J. Comput. Neurosci.
// 29:213–229; the 0.7 from memory). The first peak lies below 100 ms. Counts are
// smoothed over three bins.
func valley(bins []IntervalBin) (ms, void bench.Number) {
	smooth := make([]float64, len(bins))
	for i := range bins {
		n := 0.0
		for j := max(0, i-1); j <= min(i+1, len(bins)-1); j++ {
			smooth[i] += float64(bins[j].Count)
			n++
		}
		smooth[i] /= n
	}
	void = 0
	first, last := 0, 0 // bins of the deepest valley
	before := 0         // the highest peak so far
	for i := range smooth {
		if smooth[i] > smooth[before] {
			before = i
		}
		after := i
		for j := i; j < len(smooth); j++ {
			if smooth[j] > smooth[after] {
				after = j
			}
		}
		peaks := math.Sqrt(smooth[before] * smooth[after])
		// A peak of a handful of intervals is none.
		if before == i || after == i || bins[before].HighMS > 100 || math.Min(smooth[before], smooth[after]) < 10 {
			continue
		}
		switch v := bench.Number(1 - smooth[i]/peaks); {
		case v > void:
			void, first, last = v, i, i
		case v == void && v > 0:
			last = i
		}
	}
	if void < 0.7 {
		return bench.None, void
	}
	return bench.Number(math.Sqrt(float64(bins[first].LowMS * bins[last].HighMS))), void
}

// steadiness files a change as a share of unit.
func steadiness(c stationarity.Change, unit float64) Steadiness {
	s := Steadiness{Blocks: []bench.Number{}, Trend: bench.None, TrendSE: bench.None, PValue: bench.Number(c.PValue)}
	for _, b := range c.Blocks {
		s.Blocks = append(s.Blocks, bench.Number(b))
	}
	if unit > 0 && !math.IsNaN(c.PValue) {
		s.Trend, s.TrendSE = bench.Number(c.Trend/unit), bench.Number(c.TrendSE/unit)
	}
	return s
}
