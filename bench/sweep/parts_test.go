package sweep

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/decoders"
	"codeassay/decoders/tally"
	"codeassay/estimators/spectral"
)

// Singlets follow from events and bursts: the six codes of a usual study need
// four linear transforms and one of the fraction.
func TestBasisSharesTransforms(t *testing.T) {
	b, err := newCodeBasis(codesNamed("spike-rate", "event-rate", "singlet-rate", "burst-rate", "burst-fraction", "burst-residual"), nil, 12, 16)
	require.NoError(t, err)
	assert.Len(t, b.linear, 4)
	assert.Equal(t, 5, b.signals())
	for c, code := range b.codes {
		if !code.Linear() {
			continue
		}
		var got [6]float64
		for s, w := range b.linear {
			for i := range w {
				got[i] += b.mix[c][s] * w[i]
			}
		}
		assert.InDeltaSlice(t, asSlice(code.Trains()), asSlice(got), 1e-9, code.Name)
	}
}

func asSlice(w [decoders.Trains]float64) []float64 { return w[:] }

// A pair needs the spike and event rate to be held against, unseen.
func TestBasisAddsWhatPairsNeed(t *testing.T) {
	b, err := newCodeBasis(codesNamed("burst-rate", "burst-fraction"), [][2]int{{0, 1}}, 12, 16)
	require.NoError(t, err)
	assert.Equal(t, 2, b.shown)
	assert.Len(t, b.codes, 4)
	assert.Equal(t, "spike-rate", b.codes[b.spike].Name)
	assert.Equal(t, "event-rate", b.codes[b.event].Name)
}

func TestBlocksAreWholeSegments(t *testing.T) {
	blocks, weights, err := layBlocks([]int{100000}, 1000, false)
	require.NoError(t, err)
	assert.Len(t, blocks, maxBlocks)
	at, total := 0, 0.0
	for j, spans := range blocks {
		require.Len(t, spans, 1)
		assert.Equal(t, tally.Span{First: at, Bins: int(weights[j]) * 1000}, spans[0])
		assert.InDelta(t, 3.125, weights[j], 1)
		at += spans[0].Bins
		total += weights[j]
	}
	assert.Equal(t, 100.0, total)

	// Two trials of 2.5 segments: none crosses the edge, the rests are dropped.
	blocks, _, err = layBlocks([]int{2500, 2500}, 1000, false)
	require.NoError(t, err)
	assert.Equal(t, [][]tally.Span{{{Trial: 0, First: 0, Bins: 1000}}, {{Trial: 0, First: 1000, Bins: 1000}},
		{{Trial: 1, First: 0, Bins: 1000}}, {{Trial: 1, First: 1000, Bins: 1000}}}, blocks)

	// Repeats of one input: a block is one stretch of it in every trial.
	blocks, weights, err = layBlocks([]int{2500, 2500}, 1000, true)
	require.NoError(t, err)
	assert.Equal(t, [][]tally.Span{{{Trial: 0, First: 0, Bins: 1000}, {Trial: 1, First: 0, Bins: 1000}},
		{{Trial: 0, First: 1000, Bins: 1000}, {Trial: 1, First: 1000, Bins: 1000}}}, blocks)
	assert.Equal(t, []float64{1, 1}, weights)
}

func TestOnBins(t *testing.T) {
	assert.Equal(t, []float64{1, 2, 3}, onBins([]float64{1, 2, 3}, 0.001, 0.001, 3))
	assert.InDeltaSlice(t, []float64{1.5, 3.5}, onBins([]float64{1, 2, 3, 4}, 0.001, 0.002, 2), 1e-12, "finer samples are averaged")
	assert.InDeltaSlice(t, []float64{0, 0.25, 0.75, 1}, onBins([]float64{0, 1}, 0.002, 0.001, 4), 1e-12, "coarser ones joined by lines between their centres")
}

func TestShifted(t *testing.T) {
	x := []float64{1, 2, 3, 4}
	assert.Equal(t, []float64{2, 3}, shifted(make([]float64, 2), x, 1, 0))
	assert.Equal(t, []float64{0, 1}, shifted(make([]float64, 2), x, 1, 2), "before the trial the stream is at its mean")
	assert.Equal(t, []float64{4, 0}, shifted(make([]float64, 2), x, 1, -2))
}

// A pure delay of 7.3 ms at the phase −2πfτ, and the same with the sign turned.
func TestPhaseDelay(t *testing.T) {
	d, err := spectral.NewMultitaper(1024, 2, 0, 0.001, 40)
	require.NoError(t, err)
	n := d.Bins()
	sxx, syy, sxy := make([]float64, n), make([]float64, n), make([]complex128, n)
	for k := range n {
		sxx[k], syy[k] = 1, 1
		phase := -2 * math.Pi * float64(k) * d.Spacing() * 0.0073
		sxy[k] = complex(0.6*math.Cos(phase), 0.6*math.Sin(phase))
	}
	band := d.Band(0, 40, nil)
	delay, se := phaseDelay(band, d.Spacing(), sxx, syy, sxy, 50, 0.25, 0.001)
	assert.InDelta(t, 0.0073, delay, 0.0005)
	assert.Less(t, se, 0.001)
	for k := range sxy {
		sxy[k] = -sxy[k]
	}
	turned, _ := phaseDelay(band, d.Spacing(), sxx, syy, sxy, 50, 0.25, 0.001)
	assert.Equal(t, delay, turned)
}

func TestSizesDefaultToPowersOfTwo(t *testing.T) {
	got, err := sizes(nil, 12)
	require.NoError(t, err)
	assert.Equal(t, []int{1, 2, 4, 8, 12}, got)
	got, err = sizes([]int{8, 2, 8}, 12)
	require.NoError(t, err)
	assert.Equal(t, []int{2, 8}, got)
	got, err = sizes(nil, 1)
	require.NoError(t, err)
	assert.Equal(t, []int{1}, got)
}
