package decoders_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"codeassay/decoders"
)

const ms = int64(1e6)

// slowLabel asks of every spike outside a burst, by the definition's own words,
// whether a burst begins there, and how far it goes.
func slowLabel(r decoders.BurstRule, times []int64) []decoders.Kind {
	interval := func(i int) int64 { return times[i+1] - times[i] } // after spike i
	beginsAt := func(i int) bool {
		if i > 0 && interval(i-1) < r.MinSilence {
			return false
		}
		for n := range r.MinSpikes - 1 {
			if i+n+1 >= len(times) || interval(i+n) > r.MaxISI {
				return false
			}
			if n == 0 && r.FirstISI > 0 && interval(i) > r.FirstISI {
				return false
			}
		}
		return true
	}
	out := []decoders.Kind{}
	for i := 0; i < len(times); {
		size := 1
		if beginsAt(i) {
			for i+size < len(times) && interval(i+size-1) <= r.MaxISI {
				size++
			}
		}
		out = append(out, decoders.Kind(min(size, 4)))
		for range size - 1 {
			out = append(out, decoders.Inner)
		}
		i += size
	}
	return out
}

func TestLabelExamples(t *testing.T) {
	rule := decoders.DefaultBurstRule()
	strict := rule
	strict.FirstISI, strict.MinSilence, strict.MinSpikes = 4*ms, 50*ms, 3
	for _, c := range []struct {
		name    string
		rule    decoders.BurstRule
		timesMS []int64
		want    []decoders.Kind
	}{
		{"no spikes", rule, nil, nil},
		{"one spike", rule, []int64{7}, []decoders.Kind{1}},
		{"an interval equal to the limit belongs to the burst", rule, []int64{0, 15, 31}, []decoders.Kind{2, 0, 1}},
		{"sizes up to four and longer", rule, []int64{0, 5, 100, 105, 110, 200, 205, 210, 215, 300, 301, 302, 303, 304}, []decoders.Kind{2, 0, 3, 0, 0, 4, 0, 0, 0, 4, 0, 0, 0, 0}},
		{"two of three needed spikes", strict, []int64{0, 3}, []decoders.Kind{1, 1}},
		{"start of the trial is silent", strict, []int64{0, 4, 19}, []decoders.Kind{3, 0, 0}},
		{"first interval too long", strict, []int64{0, 5, 9}, []decoders.Kind{1, 1, 1}},
		{"no silence before", strict, []int64{0, 49, 52, 55}, []decoders.Kind{1, 1, 1, 1}},
		{"silence of just the length", strict, []int64{0, 50, 53, 56}, []decoders.Kind{1, 3, 0, 0}},
		{"a silence 1 ns longer than the limit is always there", decoders.BurstRule{MaxISI: 15 * ms, MinSilence: 15*ms + 1, MinSpikes: 2}, []int64{0, 16, 20}, []decoders.Kind{1, 2, 0}},
		{"a longer one is not", decoders.BurstRule{MaxISI: 16*ms - 1, MinSilence: 16*ms + 1, MinSpikes: 2}, []int64{0, 16, 20}, []decoders.Kind{1, 1, 1}},
		{"isolated spikes before a burst within the limit", decoders.BurstRule{MaxISI: 15 * ms, FirstISI: 4 * ms, MinSpikes: 2}, []int64{0, 10, 13, 28, 44}, []decoders.Kind{1, 3, 0, 0, 1}},
	} {
		t.Run(c.name, func(t *testing.T) {
			times := make([]int64, len(c.timesMS))
			for i, v := range c.timesMS {
				times[i] = v * ms
			}
			assert.Equal(t, c.want, append([]decoders.Kind(nil), c.rule.Label(nil, times)...))
		})
	}
}

func TestLabelAgreesWithSlowLabeller(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rule := decoders.BurstRule{
			MaxISI:     rapid.Int64Range(1, 12).Draw(t, "max"),
			MinSilence: rapid.Int64Range(0, 20).Draw(t, "silence"),
			MinSpikes:  rapid.IntRange(2, 6).Draw(t, "spikes"),
		}
		rule.FirstISI = rapid.Int64Range(0, rule.MaxISI).Draw(t, "first")
		if rapid.Bool().Draw(t, "plain") { // or all but plain
			rule.MinSilence, rule.MinSpikes, rule.FirstISI = rule.MaxISI+rapid.Int64Range(-1, 2).Draw(t, "more"), 2, 0
		}
		require.NoError(t, rule.Validate())
		intervals := rapid.SliceOfN(rapid.Int64Range(0, 24), 0, 60).Draw(t, "intervals")
		times := make([]int64, len(intervals))
		now := int64(0)
		for i, v := range intervals {
			now += v
			times[i] = now
		}
		dirty := make([]decoders.Kind, rapid.IntRange(0, 80).Draw(t, "dirty"))
		for i := range dirty {
			dirty[i] = 77
		}
		before := append([]int64{}, times...)
		got := rule.Label(dirty, times)
		require.Equal(t, slowLabel(rule, times), append([]decoders.Kind{}, got...))
		require.Equal(t, before, times)
		// Events account for all spikes, but for those beyond the fourth.
		counted, inner := 0, 0
		for _, k := range got {
			counted += int(k)
			if k == decoders.Inner {
				inner++
			}
		}
		require.LessOrEqual(t, counted, len(times))
		if inner < 4 {
			require.Equal(t, len(times), counted)
		}
	})
}

// TestExactIntervalsOnAcquisitionGrids: spikes 15 ms apart by the clock of any
// acquisition system are one burst; one tick more and they are not. (In floating
// seconds 41 % of such intervals test as longer.)
func TestExactIntervalsOnAcquisitionGrids(t *testing.T) {
	rule := decoders.DefaultBurstRule()
	rng := rand.New(rand.NewPCG(4, 2))
	for _, hz := range []int64{1000, 2000, 4000, 5000, 8000, 10000, 20000, 25000, 1000000} {
		tick := int64(1e9) / hz
		require.Zero(t, int64(1e9)%hz)
		for range 500 {
			start := rng.Int64N(3600*hz) * tick
			assert.Equal(t, []decoders.Kind{2, 0}, rule.Label(nil, []int64{start, start + 15*ms}))
			assert.Equal(t, []decoders.Kind{1, 1}, rule.Label(nil, []int64{start, start + 15*ms + tick}))
		}
	}
	// At 30 kHz a tick is not a whole number of ns: times are rounded once, and
	// 15 ms = 450 ticks is still exact, because 3 ticks are.
	for range 2000 {
		start := rng.Int64N(3600 * 30000)
		at := func(tick int64) int64 { return (2*tick*100000 + 3) / 6 }
		require.Equal(t, 15*ms, at(start+450)-at(start))
		assert.Equal(t, []decoders.Kind{2, 0}, rule.Label(nil, []int64{at(start), at(start + 450)}))
		assert.Equal(t, []decoders.Kind{1, 1}, rule.Label(nil, []int64{at(start), at(start + 451)}))
	}
}

func TestRuleErrors(t *testing.T) {
	good := decoders.DefaultBurstRule()
	assert.NoError(t, good.Validate())
	for _, c := range []struct {
		change func(r *decoders.BurstRule)
		want   string
	}{
		{func(r *decoders.BurstRule) { r.MaxISI = 0 }, "max_isi_ms = 0: the longest interval within a burst must be above 0 (the usual is 15)"},
		{func(r *decoders.BurstRule) { r.MinSpikes = 1 }, "min_spikes = 1: a burst has at least 2 spikes"},
		{func(r *decoders.BurstRule) { r.FirstISI = -ms }, "first_isi_ms = -1: must be above 0, or 0 for the same limit as max_isi_ms"},
		{func(r *decoders.BurstRule) { r.FirstISI = 20 * ms }, "first_isi_ms = 20 is longer than max_isi_ms = 15: the first interval can only be limited more strictly"},
		{func(r *decoders.BurstRule) { r.MinSilence = -5 * ms }, "min_silence_ms = -5: must be above 0, or 0 for no silence before a burst"},
	} {
		r := good
		c.change(&r)
		assert.EqualError(t, r.Validate(), c.want)
	}
	assert.Panics(t, func() { decoders.BurstRule{}.Label(nil, []int64{1}) })
}

func TestLabelReusesScratch(t *testing.T) {
	times := make([]int64, 1000)
	for i := range times {
		times[i] = int64(i*i) * ms / 8
	}
	scratch := make([]decoders.Kind, 1000)
	for _, rule := range []decoders.BurstRule{decoders.DefaultBurstRule(), {MaxISI: 15 * ms, FirstISI: ms, MinSpikes: 3}} {
		assert.Zero(t, testing.AllocsPerRun(10, func() { rule.Label(scratch, times) }))
	}
}

func BenchmarkLabel(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	times := make([]int64, 1<<21)
	now := 0.0
	for i := range times {
		if rng.Float64() < 0.3 {
			now += rng.Float64() * 15e6
		} else {
			now += rng.ExpFloat64() * 200e6
		}
		times[i] = int64(now)
	}
	dst := make([]decoders.Kind, len(times))
	for _, rule := range []decoders.BurstRule{decoders.DefaultBurstRule(), {MaxISI: 15 * ms, FirstISI: 10 * ms, MinSilence: 50 * ms, MinSpikes: 2}} {
		b.Run(fmt.Sprintf("silence %d ms", rule.MinSilence/ms), func(b *testing.B) {
			for b.Loop() {
				rule.Label(dst, times)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(times)), "ns/spike")
		})
	}
}
