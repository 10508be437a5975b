package rank

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/estimators"
)

// outcome is a hand-made sweep: three codes about one stream at sizes 2 and 8 of
// 8 cells, four blocks, two draws of the smaller size.
func outcome() *bench.Outcome {
	l := bench.Layout{Cells: 8, Sizes: []int{2, 8}, Draws: 2, Streams: []string{"soma"},
		Codes:        []decoders.Code{trains("spike-rate"), trains("event-rate"), trains("burst-rate")},
		Bands:        []bench.SweepBand{{Band: bench.Band{High: 20}, Streams: []bool{true}}},
		Estimators:   []bench.EstimatorInfo{{Name: "multitaper", Quantity: estimators.CoherenceRate, Spectral: true}},
		BlockWeights: []float64{1, 1, 1, 1}, Confidence: 0.95}
	for c := range 3 {
		l.Rows = append(l.Rows, bench.RowKey{Kind: bench.Single, Code: c, Pair: -1})
		l.Info = append(l.Info, bench.RowInfo{UsedHz: 20, Segments: 4, NEff: 12, NullMean: 1, NullVar: 0.01})
	}
	values := func(a, b, c, wobble float64) bench.Values {
		v := bench.Values{Full: []float64{a, b, c}}
		for j := range 4 {
			d := wobble * float64(j-1)
			v.Deleted = append(v.Deleted, []float64{a + d, b + 1.1*d, c + d})
		}
		return v
	}
	return &bench.Outcome{Layout: l, DelaysMS: []float64{0}, Pieces: []bench.Piece{
		{Draw: 2, Sizes: []int{0}, Value: []bench.Values{values(5, 7, 0.01, .1)}, SpikesPerS: []float64{20}, EventsPerS: []float64{10}},
		{Draw: 0, Sizes: []int{1}, Value: []bench.Values{values(20, 28, 0, .2)}, SpikesPerS: []float64{80}, EventsPerS: []float64{40}},
		{Draw: 1, Sizes: []int{0}, Value: []bench.Values{values(3, 5, -0.03, .1)}, SpikesPerS: []float64{16}, EventsPerS: []float64{8}},
	}, Cells: []bench.CellPiece{{Size: 1, Groups: 8, CellVar: []float64{5, 1, 1}, CrossVar: []float64{1, 2, 1}}}}
}

func TestAssembleMeansIntervalsAndRanks(t *testing.T) {
	doc := Assemble(outcome(), bench.Study{Seed: 9}, "0", nil)
	require.Len(t, doc.Rows, 6)
	small, big := doc.Rows[:3], doc.Rows[3:]
	assert.Equal(t, bench.Number(4), small[0].BitsPerS, "mean over draws")
	assert.InDelta(t, math.Sqrt2, float64(small[0].DrawSD), 1e-12)
	assert.Equal(t, 2, small[0].Draws)
	assert.Zero(t, big[0].DrawSD)
	// Deleted values −.2, 0, .2, .4 about 20: variance ¾·Σ(d−.1)² = .15; t₃ = 3.182446.
	half := 3.182446 * math.Sqrt(.15)
	assert.InDelta(t, 20-half, float64(big[0].CILow), 1e-4)
	assert.InDelta(t, 20+half, float64(big[0].CIHigh), 1e-4)
	assert.Equal(t, 1, *big[1].Rank)
	assert.Equal(t, 2, *big[0].Rank)
	assert.Equal(t, []string{"b", "a", ""}, []string{big[0].Letters, big[1].Letters, big[2].Letters})
	assert.False(t, big[2].Detected)
	assert.Nil(t, big[2].Rank)
	assert.False(t, big[2].BitsPerSpike.Known())
	assert.InDelta(t, 20.0/80, float64(big[0].BitsPerSpike), 1e-12)
	assert.InDelta(t, 4.0/18, float64(small[0].BitsPerSpike), 1e-12, "draw means over draw means")
	assert.InDelta(t, 4.0/9, float64(small[0].BitsPerEvent), 1e-12)
	assert.InDelta(t, -0.01, float64(small[2].BitsPerS), 1e-12, "not clipped")
}

// The interval for new cells adds V_cell − V_cell×block, never less than none,
// and has no value where one cell cannot be left out.
func TestIntervalForNewCells(t *testing.T) {
	doc := Assemble(outcome(), bench.Study{}, "0", nil)
	big := doc.Rows[3:]
	v := .15 + 4
	dof := v * v / (.15*.15/3 + 4*4/7.0)
	assert.Greater(t, dof, 7.0)
	assert.Less(t, float64(big[0].CICellsLow), 20-2*math.Sqrt(v))
	assert.Greater(t, float64(big[0].CICellsHigh), 20+2*math.Sqrt(v))
	assert.Equal(t, big[1].CILow, big[1].CICellsLow, "less than the shared noise adds nothing")
	assert.False(t, doc.Rows[0].CICellsLow.Known())
}

// Draws whose cells differ by a variance of 4 and whose blocks add noise of 9 to
// each: the difference between draws is found again, net of the noise. 400
// simulated tables, within 4 standard errors.
func TestVarianceBetweenDrawsIsNetOfNoise(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	sum, sum2 := 0.0, 0.0
	const runs, draws, blocks = 400, 10, 16
	for range runs {
		out := outcome()
		out.Layout.BlockWeights = slices.Repeat([]float64{1}, blocks)
		out.Pieces = nil
		shared := make([]float64, blocks)
		for j := range shared {
			shared[j] = 5 * rng.NormFloat64()
		}
		for d := range draws {
			cell := 2 * rng.NormFloat64()
			x, total := make([]float64, blocks), 0.0
			for j := range x {
				x[j] = 50 + cell + shared[j] + 3*rng.NormFloat64()
				total += x[j]
			}
			v := bench.Values{Full: []float64{total / blocks, 0, 0}}
			for j := range x {
				v.Deleted = append(v.Deleted, []float64{(total - x[j]) / (blocks - 1), 0, 0})
			}
			out.Layout.Draws = draws
			out.Pieces = append(out.Pieces, bench.Piece{Draw: d + 1, Sizes: []int{0}, Value: []bench.Values{v}})
		}
		b := newAssembler(out).betweenDraws(0, 0)
		sum += b
		sum2 += b * b
	}
	mean := sum / runs
	assert.InDelta(t, 4, mean, 4*math.Sqrt((sum2/runs-mean*mean)/runs))
}

// Under the null the mean of independent draws varies less than one draw, that
// of identical ones as much; overlapping draws lie between.
func TestMeanVarianceOverDraws(t *testing.T) {
	assert.Equal(t, 1.0, meanVariance(1, 0, 1, 4, 8))
	assert.Equal(t, 1.0, meanVariance(1, 0, 10, 4, 8), "no spread: the draws share everything")
	assert.InDelta(t, 0.1+0.9*0.25, meanVariance(1, 1, 10, 4, 8), 1e-12, "full spread: only the overlap is shared")
	assert.InDelta(t, 1-0.9*0.25, meanVariance(1, 0.5, 10, 4, 8), 1e-12)
}

func TestGainIsARatioWithAPositiveInterval(t *testing.T) {
	a := newAssembler(outcome())
	gain, low, high := a.gain(1, 1, 0)
	assert.InDelta(t, 1.4, float64(gain), 1e-12)
	assert.Less(t, float64(low), 1.4)
	assert.Greater(t, float64(high), 1.4)
	gain, _, _ = a.gain(1, 0, 2)
	assert.False(t, gain.Known(), "nothing can be held against zero")
}
