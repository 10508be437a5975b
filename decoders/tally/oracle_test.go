package tally

import (
	"context"
	"math"
	"math/rand/v2"
	"strconv"
	"testing"

	"github.com/stretchr/testify/require"

	"codeassay/decoders"
	"codeassay/scenarios"
)

const ms = int64(1e6)

// fake is a recording in memory.
type fake struct {
	units  []scenarios.Unit
	trials []scenarios.Trial
	trains [][]int64 // unit × trial
	labels [][]scenarios.EventLabel
	copies bool // Train fills dst, as a reader would that decodes on the fly
}

func (f *fake) Units() []scenarios.Unit   { return f.units }
func (f *fake) Trials() []scenarios.Trial { return f.trials }
func (f *fake) Train(dst []int64, unit, trial int) []int64 {
	train := f.trains[unit*len(f.trials)+trial]
	if f.copies {
		return append(dst[:0], train...)
	}
	return train
}
func (f *fake) Labels(unit, trial int) []scenarios.EventLabel {
	if f.labels == nil {
		return nil
	}
	return f.labels[unit*len(f.trials)+trial]
}

// newFake makes cells of random rates that burst now and then, with trials of
// the given durations in ns.
func newFake(rng *rand.Rand, cells int, durations ...int64) *fake {
	f := &fake{}
	for _, d := range durations {
		f.trials = append(f.trials, scenarios.Trial{Duration: d})
	}
	for u := range cells {
		f.units = append(f.units, scenarios.Unit{Name: "u" + strconv.Itoa(u)})
		rate := 2 + 30*rng.Float64() // events/s
		share := rng.Float64()
		for _, d := range durations {
			var train []int64
			for t := rng.ExpFloat64() / rate * 1e9; t < float64(d); t += rng.ExpFloat64() / rate * 1e9 {
				train = append(train, int64(t))
				for rng.Float64() < share {
					if t += rng.Float64() * 16e6; t < float64(d) {
						train = append(train, int64(t))
					}
				}
			}
			f.trains = append(f.trains, train)
		}
	}
	return f
}

func defaultRules(n int) []decoders.BurstRule {
	rules := make([]decoders.BurstRule, n)
	for i := range rules {
		rules[i] = decoders.DefaultBurstRule()
	}
	return rules
}

// cut covers every trial's bins with spans of at most longest bins, leaving
// gaps of up to gap bins.
func cut(rng *rand.Rand, f *fake, binNs int64, longest, gap int) []Span {
	var spans []Span
	for r, trial := range f.trials {
		bins := int(trial.Duration / binNs)
		for first := rng.IntN(gap + 1); first < bins; {
			n := min(1+rng.IntN(longest), bins-first)
			spans = append(spans, Span{r, first, n})
			first += n + rng.IntN(gap+1)
		}
	}
	return spans
}

func build(t testing.TB, src Source, rules []decoders.BurstRule, spans []Span, o Options) *Store {
	s, err := Build(context.Background(), src, rules, spans, o)
	require.NoError(t, err)
	return s
}

// oracle holds the six trains of some units in plain arrays, by trial and bin,
// and reads them by definition.
type oracle struct {
	trains [][][6]float64
}

func newOracle(f *fake, rules []decoders.BurstRule, units []int, binNs int64) *oracle {
	o := &oracle{}
	for _, trial := range f.trials {
		o.trains = append(o.trains, make([][6]float64, (trial.Duration+binNs-1)/binNs))
	}
	for _, u := range units {
		events, bursts := 0.0, 0.0
		kinds := make([][]decoders.Kind, len(f.trials))
		for r := range f.trials {
			kinds[r] = rules[u].Label(nil, f.Train(nil, u, r))
			for _, k := range kinds[r] {
				if k > 0 {
					events++
				}
				if k > 1 {
					bursts++
				}
			}
		}
		share := 0.0
		if events > 0 {
			share = math.Floor(bursts/events*65536+0.5) / 65536
		}
		for r := range f.trials {
			for i, t := range f.Train(nil, u, r) {
				bin := &o.trains[r][t/binNs]
				bin[0]++
				if k := kinds[r][i]; k > 0 {
					bin[k]++
					bin[5] += share
				}
			}
		}
	}
	return o
}

func (o *oracle) linear(s Span, w [6]float64) []float64 {
	out := make([]float64, s.Bins)
	for i := range out {
		for k, v := range o.trains[s.Trial][s.First+i] {
			out[i] += w[k] * v
		}
	}
	return out
}

// sum is the weighted sum of events in bins [first, end), as far as they exist.
func (o *oracle) sum(trial, first, end int, w [4]float64) float64 {
	var n [4]float64
	for i := max(0, first); i < min(end, len(o.trains[trial])); i++ {
		for k := range n {
			n[k] += o.trains[trial][i][k+1]
		}
	}
	return w[0]*n[0] + w[1]*n[1] + w[2]*n[2] + w[3]*n[3]
}

func (o *oracle) ratio(s Span, num, den [4]float64, window int, prior, baseline float64) []float64 {
	out := make([]float64, s.Bins)
	for i := range out {
		first := s.First + i - window/2
		a, b := o.sum(s.Trial, first, first+window, num), o.sum(s.Trial, first, first+window, den)
		out[i] = baseline
		if b+prior > 0 {
			out[i] = (a + prior*baseline) / (b + prior)
		}
	}
	return out
}

func (o *oracle) windows(s Span, window int, w [4]float64) []float64 {
	out := make([]float64, s.Bins/window)
	for i := range out {
		first := s.First + i*window
		out[i] = o.sum(s.Trial, first, first+window, w)
	}
	return out
}

// fields unpacks a bin: spikes, and events of 1, 2, 3 and ≥ 4 spikes.
func fields(w [2]uint64) (n [5]int64) {
	for k := range 4 {
		n[k] = int64(w[0] >> (16 * k) % 65536)
	}
	n[4] = int64(w[1] % 65536)
	return n
}
