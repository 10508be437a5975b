package main

import (
	"context"
	"fmt"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/stat/distuv"

	"codeassay/bench"
)

// accuracyStudy is a ranking of a synthetic ensemble by the primary estimator.
func accuracyStudy(seed uint64, change func(*bench.RecordingPart)) bench.Study {
	s := bench.Demo()
	s.Seed = seed
	s.Recording.Cells, s.Recording.DurationS = 256, 300
	change(&s.Recording)
	s.Sweep.Codes = []string{"spike-rate", "event-rate", "singlet-rate", "burst-rate", "burst-residual"}
	s.Sweep.Pairs = []string{"event-rate+burst-residual"}
	s.Sweep.Draws = 8
	s.Estimate.With = []string{"multitaper"}
	return s
}

// Three ensembles of known information: every linear code, every pair of them, at
// every size, is within 3 standard errors + 1 % of the closed form, and of the
// independent questions asked (streams × codes at the largest size, a quarter of
// the sizes being all but copies of each other) no more intervals miss than a
// binomial at 5 % allows with probability 99.9 %.
func TestRankingAgreesWithClosedForm(t *testing.T) {
	sets := map[string]func(*bench.RecordingPart){
		"defaults": func(*bench.RecordingPart) {},
		"fast and shallow": func(r *bench.RecordingPart) {
			r.EventRateHz, r.EventDepth, r.BurstShare, r.BurstDepth = 9, 0.15, 0.4, 0.1
		},
		"unequal bands": func(r *bench.RecordingPart) {
			r.EventRateHz, r.EventDepth, r.BurstDepth, r.BandwidthsHz = 5, 0.3, 0.08, []float64{10, 20}
		},
	}
	rows, missed := 0, 0
	for name, change := range sets {
		doc, err := runRank(context.Background(), accuracyStudy(6, change), rankOptions{Workers: 2})
		require.NoError(t, err)
		check := func(what string, value, low, high, truth bench.Number) {
			require.True(t, truth.Known(), what)
			// A 95 % interval of some 17 degrees of freedom is 2.11 standard errors wide.
			se := float64(high-low) / 2 / 2.11
			assert.InDelta(t, float64(truth), float64(value), 3*se+0.01*float64(truth)+1e-3, "%s: %s", name, what)
			rows++
			if truth < low || truth > high {
				missed++
			}
		}
		for _, r := range doc.Rows {
			check(fmt.Sprint(r.Stream, r.Given, r.Code, r.Cells), r.BitsPerS, r.CILow, r.CIHigh, r.TruthBitsPerS)
		}
		for _, r := range doc.Joint {
			check(fmt.Sprint(r.Codes, r.Cells), r.BitsPerS, r.CILow, r.CIHigh, r.TruthBitsPerS)
		}
		require.NotNil(t, doc.Truth)
		assert.Equal(t, "first-order", doc.Truth.Kind)
	}
	// Sizes, codes and conditioned rows share streams and spikes: as a guard, one
	// row in six counts as independent.
	independent := float64(rows) / 6
	limit := distuv.Binomial{N: math.Round(independent), P: 0.05}
	most := 0.0
	for limit.CDF(most) < 0.999 {
		most++
	}
	assert.LessOrEqual(t, float64(missed)/6, most, "%d of %d rows", missed, rows)
}

// Streams that drive nothing: the test rejects at its nominal rate. 60 rankings
// of 20 s and 12 cells, rows of one size and stream nearly independent between
// codes that share no events; the count of rejections over 480 rows lies within
// the binomial 99.9 % range of a quarter as many independent ones.
func TestIndependentStreamsAreNotDetected(t *testing.T) {
	rejected, rows := 0, 0
	for seed := range uint64(60) {
		s := accuracyStudy(100+seed, func(r *bench.RecordingPart) { r.Cells, r.DurationS, r.EventDepth, r.BurstDepth = 12, 30, 1e-12, 1e-12 })
		s.Sweep.Codes = []string{"event-rate", "burst-residual"}
		s.Sweep.Cells = []int{4, 12}
		doc, err := runRank(context.Background(), s, rankOptions{Workers: 2})
		require.NoError(t, err)
		for _, r := range doc.Rows {
			if len(r.Given) > 0 {
				continue
			}
			rows++
			if r.Detected {
				rejected++
			} else {
				assert.Nil(t, r.Rank)
				assert.Empty(t, r.Letters)
				assert.False(t, r.BitsPerSpike.Known())
			}
		}
	}
	require.Equal(t, 480, rows)
	limit := distuv.Binomial{N: 120, P: 0.05}
	assert.Less(t, limit.CDF(float64(rejected)/4-1), 0.9995, "%d of %d", rejected, rows)
	assert.Greater(t, limit.CDF(float64(rejected)/4), 0.0005, "%d of %d", rejected, rows)
}
