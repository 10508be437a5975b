package tally

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/decoders"
	"codeassay/scenarios"
)

// TestBurstFreeKeepsTheEventTrain bin by bin, and each unit's number of events;
// it makes times that are in order, and depends on the seed alone.
func TestBurstFreeKeepsTheEventTrain(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	f := newFake(rng, 60, 2000*ms, 70_000*ms)
	f.trains[4], f.trains[5] = nil, nil // a silent unit
	// Units that fire together crowd bins, so that times within them are sorted.
	for u := 10; u < 14; u++ {
		f.trains[2*u] = []int64{100*ms + 1, 130*ms + 2, 160*ms + 3, 160*ms + 4, 190 * ms}
	}
	rules := defaultRules(60)
	spans := []Span{{0, 10, 700}, {0, 900, 1000}, {1, 0, 70_000}}
	s := build(t, f, rules, spans, Options{BinNs: ms, HaloBins: 20})
	data, free, again := s.NewAccumulator(), s.NewAccumulator(), s.NewAccumulator()
	clearAndDirty(free)
	for i := range spans {
		data.Reset(i)
		for u := range 60 {
			data.Add(u)
		}
		s.BurstFree(free, i, rand.New(rand.NewPCG(9, uint64(i))), rules)
		for bin, w := range data.words {
			n := fields(w)
			require.Equal(t, n[1]+n[2]+n[3]+n[4], fields(free.words[bin])[0], "span %d, bin %d", i, bin)
		}
		for u := range 60 {
			times := free.free.timesOf(u, ms)
			require.True(t, slices.IsSorted(times))
			events := 0
			for page := range data.block.pages() {
				at := data.block.groups(page, u)
				events += int(at[kindCount] - at[1])
			}
			require.Len(t, times, events)
		}
		s.BurstFree(again, i, rand.New(rand.NewPCG(9, uint64(i))), rules)
		require.Equal(t, free.words, again.words)
		s.BurstFree(again, i, rand.New(rand.NewPCG(10, uint64(i))), rules)
		require.NotEqual(t, free.words, again.words)
	}
}

// TestBurstFreeHasChanceBurstsOnly: cells with real bursts and a dead time, at
// 5, 10 and 20 events/s, leave just the chance bursts of Poisson trains.
func TestBurstFreeHasChanceBurstsOnly(t *testing.T) {
	const cells, seconds = 100, 80
	for _, rate := range []float64{5, 10, 20} {
		rng := rand.New(rand.NewPCG(uint64(rate), 3))
		f := &fake{trials: []scenarios.Trial{{Duration: seconds * 1000 * ms}}}
		const dead = 0.02
		for range cells {
			f.units = append(f.units, scenarios.Unit{})
			var train []int64
			for now := 0.0; ; {
				now += dead + rng.ExpFloat64()*(1/rate-dead)
				if now >= seconds-1 {
					break
				}
				train = append(train, int64(now*1e9))
				if rng.Float64() < 0.3 {
					train = append(train, int64(now*1e9)+4*ms)
				}
			}
			f.trains = append(f.trains, train)
		}
		rules := defaultRules(cells)
		spans := []Span{{0, 0, 30_000}, {0, 30_000, 50_000}}
		s := build(t, f, rules, spans, Options{BinNs: ms, HaloBins: 20})
		a := s.NewAccumulator()
		var got, want Totals
		for i := range spans {
			s.BurstFree(a, i, rand.New(rand.NewPCG(1, uint64(i))), rules)
			for _, w := range a.inner() {
				n := fields(w)
				got = got.Add(Totals{Spikes: float64(n[0]), Events: [4]float64{float64(n[1]), float64(n[2]), float64(n[3]), float64(n[4])},
					Own: float64(w[1]>>shareOffset) / shareOne})
			}
		}
		for u := range cells {
			want = want.Add(s.ChanceTotals(u, rules[u], seconds))
		}
		expected := decoders.ChanceBurstFraction(want.Spikes/cells/seconds, rules[0].MaxISI)
		fraction := got.BurstCount() / got.EventCount()
		sd := math.Sqrt(expected * (1 - expected) / got.EventCount())
		t.Logf("%g events/s: chance bursts %.4f, expected %.4f ± %.4f", rate, fraction, expected, sd)
		// Five standard errors (one in 10⁶ by chance), and 0.2 % for units' rates
		// that differ a little and the last second, which is empty.
		assert.InDelta(t, expected, fraction, 5*sd+0.002*expected+expected/seconds)
		for k, v := range want.Trains() {
			assert.InDelta(t, v, got.Trains()[k], 6*math.Sqrt(v)+v/seconds, "train %d", k)
		}
	}
}

// TestBurstFreeUsesEachUnitsOwnRule and its own rate.
func TestBurstFreeUsesEachUnitsOwnRule(t *testing.T) {
	f := newFake(rand.New(rand.NewPCG(1, 4)), 40, 20_000*ms)
	rules := defaultRules(40)
	never := decoders.BurstRule{MaxISI: 1, MinSpikes: 2}
	for u := range rules {
		rules[u] = never
	}
	s := build(t, f, rules, []Span{{0, 0, 20_000}}, Options{BinNs: ms, Workers: 2})
	a := s.NewAccumulator()
	s.BurstFree(a, 0, rand.New(rand.NewPCG(1, 1)), rules)
	bursts := 0.0
	for _, v := range a.Linear(nil, [6]float64{0, 0, 1, 1, 1}) {
		bursts += v
	}
	assert.Zero(t, bursts)
	rules[7].MaxISI = 1000 * 1000 * ms // one burst without end
	s.BurstFree(a, 0, rand.New(rand.NewPCG(1, 1)), rules)
	for _, v := range a.Linear(nil, [6]float64{0, 0, 0, 0, 1}) {
		bursts += v
	}
	assert.Equal(t, 1.0, bursts)
	assert.Panics(t, func() { s.BurstFree(a, 0, rand.New(rand.NewPCG(1, 1)), rules[1:]) })
}
