package synthetic

import (
	"math"
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
	want := p.Truth().events.rate() * 60 * 100
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

// The length of a recording may be a large prime number of samples.
func TestStreamsOfAnyLength(t *testing.T) {
	for n, want := range map[int]int{1: 1, 7: 8, 300000: 300000, 299993: 300000} {
		assert.Equal(t, want, smoothLength(n))
	}
	p := drive(t, Settings{Cells: 1, DurationS: 29.989}) // 29989 is prime
	assert.Len(t, p.Streams()[0].Samples, 29989)
	assert.Equal(t, drive(t, Settings{Cells: 1, DurationS: 30}).Streams()[0].Samples[:29989], p.Streams()[0].Samples)
}

// A normal variable cut off at its mean keeps φ(0) and half of its slope.
func TestClipped(t *testing.T) {
	mean, slope := clipped(0, 1, 0, 50)
	assert.InDelta(t, 1/math.Sqrt(2*math.Pi), mean, 1e-12)
	assert.InDelta(t, 0.5, slope, 1e-12)
	mean, slope = clipped(0.3, 0, 0, 1)
	assert.Equal(t, [2]float64{0.3, 0}, [2]float64{mean, slope})
}

// The demo shows what it is for: each drive is best read by its own code, and the
// pair carries nearly twice the bits of the spike rate about both.
func TestDemoOfTwoDrives(t *testing.T) {
	x := drive(t, Settings{DurationS: 1}).Truth()
	const cells = 1024
	own := residual(x.BurstShare())
	for _, c := range linearCodes(x.BurstShare()) {
		assert.LessOrEqual(t, bits(x, c.weights, cells, 0), bits(x, eventRate, cells, 0), c.name)
		assert.LessOrEqual(t, bits(x, c.weights, cells, 1), bits(x, own, cells, 1), c.name)
	}
	spikes := 0.0
	for i := range 100 {
		f := 0.2 * (float64(i) + 0.5)
		spikes -= 0.2 * math.Log2(1-coherence(x, spikeRate, cells, 0, f)-coherence(x, spikeRate, cells, 1, f))
	}
	pair := jointBits(x, eventRate, own, cells)
	assert.InDelta(t, bits(x, eventRate, cells, 0)+bits(x, own, cells, 1), pair, 0.1, "the two are next to independent")
	assert.InDelta(t, 1.82, pair/spikes, 0.01)
}

// The predicted error is below 0.1 % for the demo, grows with depth, crowding and
// cells, and is finite where nothing is modulated.
func TestPredictedError(t *testing.T) {
	of := func(s Settings) float64 {
		s.DurationS = 1
		return drive(t, s).Truth().RelativeError()
	}
	demo := of(Settings{})
	assert.Less(t, demo, 0.001)
	assert.Greater(t, of(Settings{EventDepth: 0.3}), demo)
	assert.Greater(t, of(Settings{EventRateHz: 12}), demo)
	assert.Greater(t, of(Settings{Cells: 16384}), demo)
	assert.Less(t, of(Settings{EventDepth: 1e-12, BurstDepth: 1e-12}), 0.001)
	assert.Less(t, of(Settings{EventDepth: 0.3, EventRateHz: 13}), 0.05, "the corner of the range")
}

func TestSettingsOutsideTheRangeOfTruth(t *testing.T) {
	cases := map[string]Settings{
		"cells = -1: at least 1":       {Cells: -1},
		"duration_s = 0.5: at least 1": {DurationS: 0.5},
		"event_depth = 0.4: from 0 to 0.3; beyond, the hazard would be cut off at zero too often for the closed form":                                             {EventDepth: 0.4},
		"burst_depth = 0.11: from 0 to a third of the distance of burst_share = 0.3 to 0 and 1; beyond, the share would be cut off too often for the closed form": {BurstDepth: 0.11},
		"dead_time_ms = 20: from 29, so that bursts stay apart by more than 15 ms, to 100":                                                                        {DeadTimeMS: 20},
		"event_rate_hz = 20: above 0, and with a dead time of 30 ms at most 13.3, so that cells are dead less than 40 % of the time":                              {EventRateHz: 20},
		"bandwidths_hz = 300 (stream 2): above 0, at most 200":                                                                                                    {BandwidthsHz: [2]float64{20, 300}},
	}
	for want, s := range cases {
		_, err := NewPairedDrive(s)
		assert.EqualError(t, err, want)
	}
}
