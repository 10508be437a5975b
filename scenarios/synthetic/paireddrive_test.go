package synthetic

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/estimators/seed"
)

func drive(t *testing.T, s Settings) *PairedDrive {
	t.Helper()
	s.Seed = seed.New(11)
	p, err := NewPairedDrive(s)
	require.NoError(t, err)
	return p
}

// Dead-time response and renewal spectrum: λ₀ = 100/s, τ = 5 ms give r₀ = 66.6667,
// S(0) = 29.6296, S(50) = 36.2464, S(100) = 60.5334 and χ(100 Hz) = .605333 +
// .192684i (Cox 1962; Franklin and Bair 1995; values agree with the renewal
// formula evaluated in SciPy 1.10).
func TestDeadTimeResponse(t *testing.T) {
	x := &Truth{hazard: 100, dead: 0.005}
	x.rate = 100 / 1.5
	for f, want := range map[float64]float64{0: 29.6296, 50: 36.2464, 100: 60.5334} {
		assert.InDelta(t, want, x.renewal(f)+x.rate, 1e-3)
	}
	chi := complex(1-x.rate*0.005, 0) / x.d(100)
	assert.InDelta(t, 0, cmplx.Abs(chi-complex(.605333, .192684)), 1e-5)
}

// g solved in time has the transform β̂/D it is defined by.
func TestResponseInTimeEqualsFrequency(t *testing.T) {
	x := drive(t, Settings{Cells: 1, DurationS: 1}).Truth()
	for _, f := range []float64{0, 3, 10, 20} {
		assert.InDelta(t, 0, cmplx.Abs(transform(x.g, f)-x.response(f))/cmplx.Abs(x.response(0)), 2e-3)
	}
	// m = ∫ S ĝ by frequencies, against the time integral.
	assert.InEpsilon(t, x.overBand(0, func(nu float64) float64 { return real(x.response(nu)) }), x.meanProduct, 5e-3)
}

// With neither dead time nor second stream the closed form is that of superposed
// modulated Poisson cells: shared λ²a²S over a private λ.
func TestWithoutDeadTimeItIsPoisson(t *testing.T) {
	x := &Truth{hazard: 8, dead: 0, a: 0.2, p: 0.25, b: 0.05, cut: [2]float64{20, 20}, rate: 8}
	x.solveResponse()
	w := [5]float64{1, 1, 1, 1, 0}
	quad := func(m [5][5]complex128) float64 {
		s := complex(0, 0)
		for i := range w {
			for j := range w {
				s += complex(w[i]*w[j], 0) * m[i][j]
			}
		}
		return real(s)
	}
	assert.InDelta(t, 8, quad(x.Private(7)), 1e-9)
	assert.InEpsilon(t, 64*0.04/40, quad(x.Shared(7)), 1e-5, "the time grid leaves one step")
	// The residual: N λ p(1−p) private, λ²b²[S + a² S∗S] shared.
	w = [5]float64{-.25, .75, .75, .75, 0}
	assert.InDelta(t, 8*.25*.75, quad(x.Private(7)), 1e-9)
	overlap := (40.0 - 7) / 1600 // S∗S of two flat bands at 7 Hz
	assert.InEpsilon(t, 64*.0025*(1.0/40+.04*overlap), quad(x.Shared(7)), 0.01)
	for _, f := range []float64{1, 15} { // matrices are Hermitian
		for _, m := range [][5][5]complex128{x.Private(f), x.Shared(f)} {
			for i := range 5 {
				for j := range 5 {
					assert.InDelta(t, 0, cmplx.Abs(m[i][j]-conj(m[j][i])), 1e-12)
				}
			}
		}
	}
}

// Cells keep to the rule and the trade's facts: in-burst intervals well below
// 15 ms, silence of more than 15 ms otherwise, doublets 90 % of bursts, mean rate
// and burst share as set (4 standard errors).
func TestTrainsAreAsStated(t *testing.T) {
	p := drive(t, Settings{Cells: 60, DurationS: 100})
	var events, bursts, doublets float64
	for u := range p.Units() {
		train := p.Train(nil, u, 0)
		for i := 0; i < len(train); {
			j := i + 1
			for j < len(train) && train[j]-train[j-1] <= 15e6 {
				assert.LessOrEqual(t, train[j]-train[j-1], int64(7e6))
				assert.GreaterOrEqual(t, train[j]-train[j-1], int64(3e6)-1)
				j++
			}
			events++
			require.LessOrEqual(t, j-i, 3)
			if j-i > 1 {
				bursts++
			}
			if j-i == 2 {
				doublets++
			}
			i = j
		}
	}
	want := p.Truth().rate * 60 * 100
	// The streams make counts of all cells vary together, by far less than this.
	assert.InEpsilon(t, want, events, 0.02)
	assert.InDelta(t, 0.3, bursts/events, 0.01)
	assert.InDelta(t, 0.9, doublets/bursts, 4*math.Sqrt(.09/bursts))
}

func TestCellsDoNotDependOnTheirNumber(t *testing.T) {
	few, many := drive(t, Settings{Cells: 2, DurationS: 20}), drive(t, Settings{Cells: 50, DurationS: 20})
	assert.Equal(t, few.Train(nil, 1, 0), many.Train(nil, 1, 0))
	assert.Equal(t, few.streams, many.streams)
	assert.Equal(t, many.Train(nil, 7, 0), many.Train(make([]int64, 3), 7, 0))
	rec, err := many.Record()
	require.NoError(t, err)
	assert.Equal(t, many.Train(nil, 7, 0), rec.Train(nil, 7, 0))
}

func TestStreamsHaveUnitVarianceAndTheirBand(t *testing.T) {
	p := drive(t, Settings{Cells: 1, DurationS: 200, BandwidthsHz: [2]float64{20, 5}})
	for s, stream := range p.Streams() {
		v := 0.0
		for _, x := range stream.Samples {
			v += x * x / float64(len(stream.Samples))
		}
		// 2·f_c·T independent values: 4 standard errors of a variance.
		assert.InDelta(t, 1, v, 4*math.Sqrt(2/(2*stream.BandHz*200)))
		assert.Equal(t, []float64{20, 5}[s], stream.BandHz)
	}
}

func TestSettingsOutsideTheRangeOfTruth(t *testing.T) {
	cases := map[string]Settings{
		"cells = -1: at least 1":       {Cells: -1},
		"duration_s = 0.5: at least 1": {DurationS: 0.5},
		"event_depth = 0.4: from 0 to 0.3; beyond, the hazard would be cut off at zero too often for the closed form":                                             {EventDepth: 0.4},
		"burst_depth = 0.11: from 0 to a third of the distance of burst_share = 0.3 to 0 and 1; beyond, the share would be cut off too often for the closed form": {BurstDepth: 0.11},
		"dead_time_ms = 20: at least 29, so that bursts stay apart by more than 15 ms":                                                                            {DeadTimeMS: 20},
		"event_rate_hz = 20: above 0, and with a dead time of 30 ms at most 13.3, so that cells are dead less than 40 % of the time":                              {EventRateHz: 20},
		"bandwidths_hz = 300 (stream 2): above 0, at most 200":                                                                                                    {BandwidthsHz: [2]float64{20, 300}},
	}
	for want, s := range cases {
		_, err := NewPairedDrive(s)
		assert.EqualError(t, err, want)
	}
}
