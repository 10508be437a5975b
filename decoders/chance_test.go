package decoders_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"

	"codeassay/decoders"
)

func TestChanceBurstFraction(t *testing.T) {
	// 1 − e^(−rθ) by hand; rates and limit of the usual case.
	assert.InDelta(t, 0.0722565, decoders.ChanceBurstFraction(5, 15*ms), 5e-8)
	assert.InDelta(t, 0.1392920, decoders.ChanceBurstFraction(10, 15*ms), 5e-8)
	assert.InDelta(t, 0.2591818, decoders.ChanceBurstFraction(20, 15*ms), 5e-8)
	assert.Equal(t, 0.0, decoders.ChanceBurstFraction(0, 15*ms))
}

// TestChanceEvents labels long Poisson trains by every kind of rule.
func TestChanceEvents(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 5))
	const n = 400_000
	times := make([]int64, n)
	var kinds []decoders.Kind
	for _, rate := range []float64{5, 20, 60} {
		now := 0.0
		for i := range times {
			now += rng.ExpFloat64() / rate * 1e9
			times[i] = int64(now)
		}
		for _, rule := range []decoders.BurstRule{
			decoders.DefaultBurstRule(),
			{MaxISI: 15 * ms, MinSpikes: 3},
			{MaxISI: 25 * ms, MinSpikes: 5},
			{MaxISI: 15 * ms, FirstISI: 5 * ms, MinSpikes: 2},
			{MaxISI: 15 * ms, MinSilence: 60 * ms, MinSpikes: 2},
			{MaxISI: 15 * ms, FirstISI: 5 * ms, MinSilence: 8 * ms, MinSpikes: 2},
			{MaxISI: 15 * ms, FirstISI: 8 * ms, MinSilence: 5 * ms, MinSpikes: 3},
			{MaxISI: 15 * ms, FirstISI: 4 * ms, MinSilence: 100 * ms, MinSpikes: 2},
		} {
			kinds = rule.Label(kinds, times)
			var got [5]float64
			for _, k := range kinds {
				got[k]++
			}
			want := rule.ChanceEvents(rate)
			for size := range 4 {
				// Counts are sums over nearly independent runs of at most a few
				// events each; 3 × the Poisson error and 5 of those: no more
				// than one in 10⁶ by chance over all checks.
				assert.InDelta(t, n*want[size], got[size+1], 5*math.Sqrt(3*n*want[size])+5, "%+v at %g/s, size %d", rule, rate, size+1)
			}
			if rule == decoders.DefaultBurstRule() {
				bursts := want[1] + want[2] + want[3]
				assert.InEpsilon(t, decoders.ChanceBurstFraction(rate, rule.MaxISI), bursts/(want[0]+bursts), 1e-12)
			}
		}
	}
	assert.Equal(t, [4]float64{1, 0, 0, 0}, decoders.DefaultBurstRule().ChanceEvents(0))
}

// The rate is found again from the events that a Poisson train of it shows.
func TestPoissonRateInvertsChanceEvents(t *testing.T) {
	rules := []decoders.BurstRule{decoders.DefaultBurstRule(), {MaxISI: 15e6, FirstISI: 6e6, MinSilence: 50e6, MinSpikes: 3}}
	for _, rule := range rules {
		for _, rate := range []float64{0.1, 5, 20, 50} {
			e := rule.ChanceEvents(rate)
			assert.InEpsilon(t, rate, rule.PoissonRate(rate*(e[0]+e[1]+e[2]+e[3])), 1e-6)
		}
	}
	assert.InEpsilon(t, 20, decoders.DefaultBurstRule().PoissonRate(20*math.Exp(-0.3)), 1e-9)
	assert.InEpsilon(t, 1/0.015, decoders.DefaultBurstRule().PoissonRate(100), 1e-9, "no Poisson train shows as many events")
}
