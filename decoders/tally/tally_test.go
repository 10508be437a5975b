package tally

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"codeassay/decoders"
	"codeassay/scenarios"
)

var (
	allEvents = [4]float64{1, 1, 1, 1}
	allBursts = [4]float64{0, 1, 1, 1}
	sizes     = [4]float64{0, 2, 3, 4}
	odd       = [4]float64{-0.3, 0.7, 1.1, 2.9}
	above     = [4]float64{0.2, 0, 1.5, 70000}
)

var linearWeights = [][6]float64{
	{1}, {0, 1, 1, 1, 1}, {0, 1}, {0, 0, 1, 1, 1}, {0, 0, 1, 1, 1, -1}, {0, 0, 0, 0, 0, 1},
	{1, 2, 3, 4, 5}, {300, 0, 0, 0, 9000}, {0.1, -0.7, 1.3, 0, 0.25, 0.5}, {0, -1, 2, 3, 4, 0}, {},
}

func clearAndDirty(a *Accumulator) {
	for i := range a.all {
		a.all[i] = [2]uint64{0xdeadbeefdeadbeef, 0xfeedfeedfeedfeed}
	}
}

func filled(n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = math.NaN()
	}
	return x
}

// TestReadingsAgreeWithOracle: any units in any order, any cut, any halo, with
// dirty scratch. Weights are chosen so that every way of reading is used;
// sums of fractional weights may differ in their last digits.
func TestReadingsAgreeWithOracle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		binNs := rapid.SampledFrom([]int64{ms, 250_000, 5 * ms, 333_333}).Draw(t, "bin")
		durations := []int64{200*ms + rng.Int64N(50*ms), 90 * ms, 7*binNs + 1}
		f := newFake(rng, 1+rng.IntN(12), durations[:1+rng.IntN(3)]...)
		f.copies = rng.IntN(2) == 0
		rules := defaultRules(len(f.units))
		rules[0] = decoders.BurstRule{MaxISI: 10 * ms, FirstISI: 5 * ms, MinSilence: 30 * ms, MinSpikes: 3}
		halo := rng.IntN(40)
		window := 1 + rng.IntN(2*halo+1)
		spans := cut(rng, f, binNs, 1+rng.IntN(300), rng.IntN(20))
		s, err := Build(context.Background(), f, rules, spans, Options{BinNs: binNs, HaloBins: halo, Workers: 2})
		require.NoError(t, err)

		order := rng.Perm(len(f.units))
		chosen := order[:1+rng.IntN(len(order))]
		group := chosen[:rng.IntN(len(chosen)+1)]
		all, rest := newOracle(f, rules, chosen, binNs), newOracle(f, rules, chosen[len(group):], binNs)

		a, g, left := s.NewAccumulator(), s.NewAccumulator(), s.NewAccumulator()
		clearAndDirty(a)
		clearAndDirty(g)
		clearAndDirty(left)
		for i, span := range spans {
			a.Reset(i)
			g.Reset(i)
			for _, u := range chosen {
				a.Add(u)
			}
			for _, u := range group {
				g.Add(u)
			}
			left.Copy(a)
			left.Sub(g)
			for _, c := range []struct {
				acc    *Accumulator
				oracle *oracle
			}{{a, all}, {left, rest}} {
				for _, w := range linearWeights {
					require.InDeltaSlice(t, c.oracle.linear(span, w), c.acc.Linear(filled(span.Bins), w), 1e-9, "%v", w)
				}
				for _, pair := range [][2][4]float64{{allBursts, allEvents}, {sizes, allBursts}, {odd, allEvents}, {allBursts, above}} {
					for _, prior := range []float64{0, 16} {
						want := c.oracle.ratio(span, pair[0], pair[1], window, prior, 0.375)
						got := c.acc.Ratio(filled(span.Bins), pair[0], pair[1], window, prior, 0.375)
						require.InDeltaSlice(t, want, got, 1e-12, "%v, window %d, prior %g", pair, window, prior)
					}
				}
				n := 1 + rng.IntN(span.Bins)
				for _, w := range [][4]float64{allEvents, sizes, odd} {
					require.InDeltaSlice(t, c.oracle.windows(span, n, w), c.acc.Windows(filled(span.Bins/n), n, w), 1e-9)
				}
			}
		}
	})
}

// TestBothWaysOfReadingAreTheSameBits: sums with whole weights are exact, so one
// multiplication equals the general sum in every bit, up to the fullest bin.
func TestBothWaysOfReadingAreTheSameBits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var w [4]float64
		for i := range w {
			w[i] = float64(rapid.IntRange(0, 5).Draw(t, "weight"))
		}
		most := rapid.IntRange(0, maxCount).Draw(t, "most")
		var n [4]uint64
		left := uint64(most)
		for i := range n {
			n[i] = rapid.Uint64Range(0, left).Draw(t, "count")
			left -= n[i]
		}
		bin := [2]uint64{rapid.Uint64Range(0, maxCount).Draw(t, "spikes") | n[0]<<16 | n[1]<<32 | n[2]<<48,
			n[3] | rapid.Uint64().Draw(t, "own")<<32}
		if sum, ok := newWeighing(w, most); ok {
			require.Equal(t, lanesOf(&bin).weigh(&w), sum.of(bin[0], bin[1]))
		} else {
			require.Greater(t, slices.Max(w[:])*float64(most), float64(maxCount))
		}
	})
	for _, w := range [][4]float64{{-1}, {0.5}, {0, math.MaxFloat64}} {
		_, ok := newWeighing(w, 1)
		require.False(t, ok)
	}

	rng := rand.New(rand.NewPCG(3, 9))
	f := newFake(rng, 40, 2000*ms)
	s := build(t, f, defaultRules(40), []Span{{0, 100, 1500}}, Options{BinNs: ms, HaloBins: 60})
	a := s.NewAccumulator()
	a.Reset(0)
	for u := range 40 {
		a.Add(u)
	}
	for _, window := range []int{1, 2, 19, 20, 121} {
		packed := a.Ratio(nil, sizes, allBursts, window, 2.7, 2.2)
		s.blocks[0].most = maxCount // no packed reading fits
		wide := a.Ratio(nil, sizes, allBursts, window, 2.7, 2.2)
		s.blocks[0].most = 40
		assert.Equal(t, wide, packed)
	}
}

// TestSignalsDoNotDependOnSpans cuts one recording in many ways.
func TestSignalsDoNotDependOnSpans(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	f := newFake(rng, 30, 1500*ms, 900*ms)
	rules := defaultRules(30)
	o := Options{BinNs: ms, HaloBins: 12}
	signals := func(spans []Span) (out [][]float64) {
		s := build(t, f, rules, spans, o)
		a := s.NewAccumulator()
		out = make([][]float64, 4)
		for i := range spans {
			a.Reset(i)
			for _, u := range rng.Perm(30) {
				a.Add(u)
			}
			out[0] = append(out[0], a.Linear(nil, [6]float64{0, 0, 1, 1, 1, -1})...)
			out[1] = append(out[1], a.Linear(nil, [6]float64{0.1, 0.2, -0.3, 0.4, 0.5, 0.6})...)
			out[2] = append(out[2], a.Ratio(nil, allBursts, allEvents, 24, 16, 0.31)...)
			out[3] = append(out[3], a.Ratio(nil, odd, above, 25, 0, 0.31)...)
		}
		return out
	}
	whole := signals([]Span{{0, 0, 1500}, {1, 0, 900}})
	for range 20 {
		require.Equal(t, whole, signals(cut(rng, f, ms, 1+rng.IntN(500), 0)))
	}
}

// TestSameStoreForAnyWorkers, whichever way the source hands out its trains.
func TestSameStoreForAnyWorkers(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 1))
	f := newFake(rng, 97, 3000*ms, 1000*ms)
	spans := cut(rng, f, ms, 400, 3)
	before := f.clone()
	want := build(t, f, defaultRules(97), spans, Options{BinNs: ms, HaloBins: 10})
	for _, workers := range []int{1, 2, 7} {
		for _, copies := range []bool{false, true} {
			f.copies = copies
			require.Equal(t, want, build(t, f, defaultRules(97), spans, Options{BinNs: ms, HaloBins: 10, Workers: workers}))
		}
	}
	assert.Equal(t, before, f.trains)
}

func (f *fake) clone() [][]int64 {
	var out [][]int64
	for _, train := range f.trains {
		out = append(out, append([]int64(nil), train...))
	}
	return out
}

// TestTotals: spans that cover the recording hold all that was counted, and
// events account for every spike but those beyond the fourth.
func TestTotals(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 2))
	f := newFake(rng, 25, 2000*ms, 500*ms)
	f.trains[0], f.trains[1] = nil, nil // a silent unit
	spans := cut(rng, f, ms, 300, 0)
	s := build(t, f, defaultRules(25), spans, Options{BinNs: ms, HaloBins: 5})
	var total Totals
	for u := range 25 {
		x := s.Totals(u)
		total = total.Add(x)
		spikes := len(f.trains[2*u]) + len(f.trains[2*u+1])
		assert.Equal(t, float64(spikes), x.Spikes)
		assert.LessOrEqual(t, x.Events[0]+2*x.Events[1]+3*x.Events[2]+4*x.Events[3], x.Spikes)
		if spikes > 0 {
			assert.InDelta(t, x.BurstCount()/x.EventCount(), x.Own/x.EventCount(), 0.5/65536)
		}
	}
	assert.Equal(t, Totals{}, s.Totals(0))
	var sum [6]float64
	a := s.NewAccumulator()
	for i := range spans {
		a.Reset(i)
		for u := range 25 {
			a.Add(u)
		}
		for k := range sum {
			w := [6]float64{}
			w[k] = 1
			for _, v := range a.Linear(nil, w) {
				sum[k] += v
			}
		}
	}
	assert.Equal(t, total.Trains(), sum) // all are multiples of 2⁻¹⁶: exact
}

// TestLongSpans: more bins than 16 bits address, with events at every edge.
func TestLongSpans(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 1))
	f := newFake(rng, 3, 300_000*ms)
	edges := []int64{}
	for _, bin := range []int64{49_990, 50_000, 115_525, 115_526, 115_536, 181_061, 181_062, 249_999, 250_000, 250_009, 250_010} {
		edges = append(edges, bin*ms, bin*ms+ms-1)
	}
	f.trains[0] = edges
	rules := defaultRules(3)
	span := Span{0, 50_000, 200_000}
	s := build(t, f, rules, []Span{span}, Options{BinNs: ms, HaloBins: 10, Workers: 2})
	require.Equal(t, 4, s.blocks[0].pages())
	o := newOracle(f, rules, []int{0, 1, 2}, ms)
	a := s.NewAccumulator()
	a.Reset(0)
	for u := range 3 {
		a.Add(u)
	}
	for k := range 6 {
		w := [6]float64{}
		w[k] = 1
		require.Equal(t, o.linear(span, w), a.Linear(nil, w))
	}
	require.InDeltaSlice(t, o.ratio(span, allBursts, allEvents, 20, 1, 0.5), a.Ratio(nil, allBursts, allEvents, 20, 1, 0.5), 1e-15)
}

// TestFullBins: 65535 spikes a bin are counted, one more is an error.
func TestFullBins(t *testing.T) {
	crowd := func(n int) *fake {
		f := &fake{trials: []scenarios.Trial{{Duration: 100 * ms}}}
		for range n {
			f.units = append(f.units, scenarios.Unit{})
			f.trains = append(f.trains, []int64{42*ms + 1, 50 * ms, 75 * ms}) // a burst and an isolated spike
		}
		return f
	}
	f := crowd(65535)
	spans := []Span{{0, 10, 70}}
	o := Options{BinNs: ms, HaloBins: 35, Workers: 2}
	s := build(t, f, defaultRules(65535), spans, o)
	a, some := s.NewAccumulator(), s.NewAccumulator()
	a.Reset(0)
	some.Reset(0)
	for u := range 65535 {
		a.Add(u)
		if u%3 == 0 {
			some.Add(u)
		}
	}
	for k, want := range [6][3]float64{{65535, 65535, 65535}, {0, 0, 65535}, {65535, 0, 0}, {}, {}, {65535 / 2.0, 0, 65535 / 2.0}} {
		w := [6]float64{}
		w[k] = 1
		x := a.Linear(nil, w)
		assert.Equal(t, want, [3]float64{x[32], x[40], x[65]}, "train %d", k)
	}
	assert.Equal(t, (65535.0+8)/(65535+16), a.Ratio(nil, allBursts, allEvents, 11, 16, 0.5)[32])
	assert.Equal(t, (65535.0+4)/(2*65535+16), a.Ratio(nil, allBursts, allEvents, 71, 16, 0.25)[50]) // bins 25 to 95
	assert.Equal(t, []float64{2 * 65535}, a.Windows(nil, 70, allEvents))
	a.Sub(some)
	assert.Equal(t, 65535.0-21845, a.Linear(nil, [6]float64{0, 0, 1})[32])

	_, err := Build(context.Background(), crowd(65536), defaultRules(65536), spans, o)
	assert.EqualError(t, err, "the bin of 1 ms at 0.042 s of trial 1 holds 65536 spikes, more than the 65535 that can be counted: use narrower bins ([sweep] bin_ms)")
}

func TestUserLabels(t *testing.T) {
	f := &fake{
		units:  []scenarios.Unit{{Name: "a"}, {Name: "b"}},
		trials: []scenarios.Trial{{Duration: 100 * ms}, {Duration: 100 * ms}},
		trains: [][]int64{{ms, 2 * ms}, {ms, 90 * ms}, {5 * ms}, {6 * ms, 7 * ms}},
		labels: [][]scenarios.EventLabel{
			{scenarios.SingleSpike, scenarios.SingleSpike}, {scenarios.FirstSpike, scenarios.InnerSpike}, {scenarios.SingleSpike}, nil},
	}
	spans := []Span{{0, 0, 100}, {1, 0, 100}}
	o := Options{BinNs: ms, Workers: 2}
	s := build(t, f, defaultRules(2), spans, o)
	assert.Equal(t, Totals{Spikes: 4, Events: [4]float64{2, 1, 0, 0}, Own: 3 * 21845.0 / 65536}, s.Totals(0))
	assert.Equal(t, [4]float64{1, 1, 0, 0}, s.Totals(1).Events) // the rule, where there are no labels

	f.labels[1] = f.labels[1][1:]
	f.labels[2] = []scenarios.EventLabel{scenarios.InnerSpike}
	_, err := Build(context.Background(), f, defaultRules(2), spans, o)
	assert.EqualError(t, err, "unit a, trial 2: 1 event labels for 2 spikes")
	f.labels[1] = nil
	_, err = Build(context.Background(), f, defaultRules(2), spans, o)
	assert.EqualError(t, err, "unit b, trial 1: spike 0 is labelled inner, but no burst is going on: label the burst's first spike first")
}

func TestCancel(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	f := newFake(rand.New(rand.NewPCG(1, 1)), 3, 100*ms)
	_, err := Build(ctx, f, defaultRules(3), []Span{{0, 0, 100}}, Options{BinNs: ms})
	assert.ErrorIs(t, err, context.Canceled)
}

func TestMisusePanics(t *testing.T) {
	f := newFake(rand.New(rand.NewPCG(1, 1)), 2, 100*ms+1)
	ok := Options{BinNs: ms, HaloBins: 3}
	try := func(rules int, o Options, spans ...Span) func() {
		return func() { _, _ = Build(context.Background(), f, defaultRules(rules), spans, o) }
	}
	assert.NotPanics(t, try(2, ok, Span{0, 0, 50}, Span{0, 50, 51})) // the last bin holds 1 ns
	assert.Panics(t, try(1, ok, Span{0, 0, 50}))
	assert.Panics(t, try(2, Options{}, Span{0, 0, 50}))
	assert.Panics(t, try(2, ok, Span{0, 0, 102}))
	assert.Panics(t, try(2, ok, Span{1, 0, 1}))
	assert.Panics(t, try(2, ok, Span{0, 0, 50}, Span{0, 49, 5}))
	assert.Panics(t, try(2, ok, Span{0, 0, 0}))

	s := build(t, f, defaultRules(2), []Span{{0, 0, 50}, {0, 50, 50}}, ok)
	a, b := s.NewAccumulator(), s.NewAccumulator()
	a.Reset(0)
	b.Reset(1)
	assert.NotPanics(t, func() { a.Ratio(nil, allBursts, allEvents, 7, 0, 0) })
	assert.Panics(t, func() { a.Ratio(nil, allBursts, allEvents, 8, 0, 0) })
	assert.Panics(t, func() { a.Linear(make([]float64, 49), [6]float64{1}) })
	assert.Panics(t, func() { a.Windows(nil, 0, allEvents) })
	assert.Panics(t, func() { a.Sub(b) })
	assert.Panics(t, func() {
		a.Copy(build(t, f, defaultRules(2), []Span{{0, 0, 50}}, ok).NewAccumulator())
	})
}

func TestDivider(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		by := rapid.Int64Min(1).Draw(t, "by")
		x := rapid.Int64Min(0).Draw(t, "x")
		d := newDivider(by)
		require.Equal(t, uint64(x/by), d.quotient(x))
		for _, edge := range []int64{x / by * by, max(0, x/by*by-1)} {
			require.Equal(t, uint64(edge/by), d.quotient(edge))
		}
	})
	// Whole bins on a grid of 1 ms stay where they are. (In floating seconds
	// floor(t/0.001) misplaces 13 % of them.)
	d := newDivider(ms)
	for bin := range int64(100_000) {
		require.Equal(t, uint64(bin), d.quotient(bin*ms))
		require.Equal(t, uint64(bin), d.quotient(bin*ms+ms-1))
	}
}
