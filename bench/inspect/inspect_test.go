package inspect

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/estimators/seed"
	"codeassay/scenarios"
	"codeassay/scenarios/files"
	"codeassay/scenarios/synthetic"
)

// build makes a recording of trains in seconds under one white stream at 100 Hz.
func build(t *testing.T, durationS float64, trains map[string][]float64, stream func(i int) float64) *scenarios.Recording {
	if stream == nil {
		rng := rand.New(rand.NewPCG(1, 1))
		stream = func(int) float64 { return rng.NormFloat64() }
	}
	samples := make([]float64, int(durationS*100))
	for i := range samples {
		samples[i] = stream(i)
	}
	spec := scenarios.Spec{Streams: []scenarios.Stream{{Name: "drive", Samples: samples}}, Dt: 0.01}
	for unit, times := range trains {
		for _, s := range times {
			spec.Columns.Unit = append(spec.Columns.Unit, unit)
			spec.Columns.TimeS = append(spec.Columns.TimeS, s)
		}
	}
	r, err := scenarios.New(spec)
	require.NoError(t, err)
	return r
}

func poisson(rng *rand.Rand, rate, from, to float64) []float64 {
	var out []float64
	for s := from + rng.ExpFloat64()/rate; s < to; s += rng.ExpFloat64() / rate {
		out = append(out, s)
	}
	return out
}

func inspectIt(t *testing.T, src bench.Source) *Document {
	doc, err := Run(context.Background(), bench.Defaults(), src, "test")
	require.NoError(t, err)
	return doc
}

// about collects the warnings on a subject.
func about(doc *Document, subject string) string {
	var out []string
	for _, w := range doc.Warnings {
		if w.About == subject {
			out = append(out, w.Text)
		}
	}
	return strings.Join(out, "\n")
}

func TestCountsByHand(t *testing.T) {
	doc := inspectIt(t, build(t, 10, map[string][]float64{
		"a": {1, 1.015, 2, 3, 3.004, 3.009, 3.5, 5, 5.01, 5.02, 5.03, 5.04}, // doublet, single, triplet, single, five
		"b": {4, 4.0005},
		"c": {6},
	}, nil))
	a := doc.Rows[0]
	assert.Equal(t, 12, a.Spikes)
	assert.Equal(t, 5, a.Events)
	assert.Equal(t, 3, a.Bursts)
	assert.InDelta(t, 0.6, float64(a.BurstFraction), 1e-12)
	// λ with λ e^(−15 ms λ) = 0.5 events/s: two steps of λ ← 0.5 e^(15 ms λ) are exact to 1e-7.
	rate := 0.5 * math.Exp(0.015*0.5*math.Exp(0.015*0.5))
	assert.InDelta(t, 1-math.Exp(-rate*0.015), float64(a.Chance), 1e-7)
	assert.Equal(t, 1, doc.Rows[1].Below1MS)
	assert.Equal(t, Sizes{bench.Number(3.0 / 7), bench.Number(2.0 / 7), bench.Number(1.0 / 7), bench.Number(1.0 / 7)}, doc.Sizes)
	assert.Equal(t, int64(15), doc.Recording.Spikes)
	assert.Equal(t, int64(7), doc.Recording.Events)
	assert.Equal(t, int64(4), doc.Recording.Bursts)
	assert.Equal(t, 1, doc.Rates.SingleSpike)
	assert.Equal(t, int64(12), doc.Intervals.Total)
	assert.InDelta(t, 8.0/12, float64(doc.Intervals.WithinThreshold), 1e-12, "an interval equal to the threshold is within")
	sum := int64(0)
	edge := false
	for _, b := range doc.Intervals.Bins {
		sum += b.Count
		edge = edge || math.Abs(float64(b.HighMS)-15) < 1e-9
		assert.Less(t, b.LowMS, b.HighMS)
	}
	assert.Equal(t, doc.Intervals.Total, sum)
	assert.True(t, edge, "the threshold is an edge")
}

func TestOwnLabelsAndOwnThreshold(t *testing.T) {
	spec := scenarios.Spec{Streams: []scenarios.Stream{{Name: "x", Samples: make([]float64, 1000)}}, Dt: 0.01,
		Columns: scenarios.SpikeColumns{Unit: []string{"a", "a", "a"}, TimeS: []float64{1, 2, 3},
			Label: []scenarios.EventLabel{scenarios.FirstSpike, scenarios.InnerSpike, scenarios.SingleSpike}}}
	spec.Streams[0].Samples[3] = 1
	r, err := scenarios.New(spec)
	require.NoError(t, err)
	doc := inspectIt(t, r)
	assert.Equal(t, 2, doc.Rows[0].Events)
	assert.Equal(t, 1, doc.Rows[0].Bursts)

	spec.Columns.Label = nil
	unit := scenarios.NewUnit("a")
	unit.MaxISI = 1e9
	spec.Units = []scenarios.Unit{unit}
	r, err = scenarios.New(spec)
	require.NoError(t, err)
	assert.Equal(t, 1, inspectIt(t, r).Rows[0].Events)
}

// Short intervals about 5 ms and long ones about 300 ms: the valley lies halfway
// between on the log axis, where there is nothing.
func TestValley(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 0))
	var times []float64
	for s := 0.1; s < 99; s += 0.3 * math.Exp(0.3*rng.NormFloat64()) {
		times = append(times, s, s+0.005*math.Exp(0.2*rng.NormFloat64()))
	}
	doc := inspectIt(t, build(t, 100, map[string][]float64{"a": times}, nil))
	assert.InDelta(t, math.Log(math.Sqrt(5*300)), math.Log(float64(doc.Intervals.ValleyMS)), 0.35)
	assert.Greater(t, float64(doc.Intervals.Void), 0.95)
	assert.Contains(t, about(doc, "bursts"), "has its valley near")

	doc = inspectIt(t, build(t, 100, map[string][]float64{"a": poisson(rng, 10, 0, 100)}, nil))
	assert.False(t, doc.Intervals.ValleyMS.Known())
}

// naivePairs counts coincidences the slow, obvious way.
func naivePairs(trains [][]int64, limit int64) (follow, copies [][]int) {
	n := len(trains)
	for range n {
		follow, copies = append(follow, make([]int, n)), append(copies, make([]int, n))
	}
	for a := range n {
		for b := range n {
			for _, s := range trains[a] {
				for _, u := range trains[b] {
					switch d := u - s; {
					case a == b:
					case d > together && d <= limit:
						follow[a][b]++
					case d > 0 && d <= together || d == 0 && a < b:
						copies[a][b]++
					}
				}
			}
		}
	}
	return follow, copies
}

func TestPairCountsEqualDirectCount(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 0))
	trains := map[string][]float64{}
	for u := range 6 {
		trains[fmt.Sprint(u)] = poisson(rng, 60, 0, 5)
	}
	trains["0"] = append(trains["0"], trains["1"][:20]...) // exact coincidences
	trains["2"] = append(trains["2"], 0.999999999, 1.0, 2.0)
	trains["3"] = append(trains["3"], 1.000499999, 1.0005, 2.015)
	r := build(t, 5, trains, nil)
	c := newPairCounter(r, bench.Defaults().Bursts)
	var times [][]int64
	for u := range r.Units() {
		times = append(times, r.Train(nil, u, 0))
	}
	require.NoError(t, c.trial(context.Background(), r.Trials()[0].Duration, times))
	follow, copies := naivePairs(times, 15e6)
	n := len(times)
	for a := range n {
		assert.Equal(t, int64(len(times[a])), c.spikes[a])
		for b := range n {
			if a == b {
				continue
			}
			assert.Equal(t, follow[a][b], int(c.follow[a*n+b]), "%d then %d", a, b)
			assert.Equal(t, copies[a][b], int(c.copies[a*n+b]), "%d with %d", a, b)
		}
	}
}

// A fifth of the spikes of "split" come 4 ms after a spike of "whole"; "copy"
// repeats 40 % of the spikes of "seen".
func TestSplitAndCopiedUnitsAreFound(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 0))
	trains := map[string][]float64{}
	for u := range 30 {
		trains[fmt.Sprintf("u%d", u)] = poisson(rng, 6, 0, 100)
	}
	trains["whole"], trains["seen"] = poisson(rng, 6, 0, 99), poisson(rng, 6, 0, 99)
	trains["split"], trains["copy"] = poisson(rng, 4, 0, 99), poisson(rng, 3, 0, 99)
	for _, s := range trains["whole"] {
		if rng.Float64() < 0.2 {
			trains["split"] = append(trains["split"], s+0.004)
		}
	}
	for _, s := range trains["seen"] {
		if rng.Float64() < 0.4 {
			trains["copy"] = append(trains["copy"], s+0.0002)
		}
	}
	doc := inspectIt(t, build(t, 100, trains, nil))
	require.Len(t, doc.Pairs.Found, 2)
	assert.Equal(t, 1, doc.Pairs.Followers)
	assert.Equal(t, 1, doc.Pairs.Copies)
	for _, p := range doc.Pairs.Found {
		switch p.Kind {
		case "follower":
			assert.Equal(t, [2]string{"whole", "split"}, [2]string{p.First, p.Then})
			assert.Greater(t, float64(p.Alone), 0.8)
		case "copy":
			assert.ElementsMatch(t, []string{"seen", "copy"}, []string{p.First, p.Then})
		}
	}
	assert.Contains(t, about(doc, "unit pairs"), "split after whole")
	assert.Contains(t, about(doc, "unit pairs"), "sorted twice")
}

// Common drive correlates all pairs of the demo's cells; none is to be called
// split, and nothing else is wrong with it but a remark on chance bursts.
func TestDemoIsSound(t *testing.T) {
	for k := range 3 {
		p, err := synthetic.NewPairedDrive(synthetic.Settings{Cells: 60, DurationS: 100, EventDepth: 0.3, Seed: seed.New(uint64(k))})
		require.NoError(t, err)
		r, err := p.Record()
		require.NoError(t, err)
		doc := inspectIt(t, r)
		assert.Zero(t, doc.Pairs.Followers+doc.Pairs.Copies)
		for _, w := range doc.Warnings {
			assert.Equal(t, estimators.Note, w.Severity, w.Text)
		}
		assert.InDelta(t, 0.3, float64(doc.Recording.BurstFraction), 0.02)
		assert.Equal(t, bench.Number(20), doc.Streams[0].BandHz)
		assert.True(t, doc.Streams[0].BandKnown)
	}
}

func TestLargeEnsemblesAreCompared(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 0))
	trains := map[string][]float64{}
	for u := range 300 {
		trains[fmt.Sprintf("u%d", u)] = poisson(rng, 10, 0, 60)
	}
	r := build(t, 60, trains, nil)
	c := newPairCounter(r, bench.Defaults().Bursts)
	c.share = 0.3 // as if the budget ran short
	var times [][]int64
	for u := range r.Units() {
		times = append(times, r.Train(nil, u, 0))
	}
	require.NoError(t, c.trial(context.Background(), r.Trials()[0].Duration, times))
	assert.InDelta(t, 18, c.seconds, 1e-9)
	out := c.check(r)
	assert.Zero(t, out.Followers+out.Copies)
	assert.Equal(t, 300, out.Units)
}

func TestFaultsAreNamed(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 0))
	steady := func() []float64 { return poisson(rng, 8, 0, 100) }
	var refractory, regular []float64
	for s := 0.05; s < 99; s += 0.1 + 0.05*rng.Float64() {
		regular = append(regular, s)
	}
	for _, s := range poisson(rng, 5, 0, 99) {
		refractory = append(refractory, s, s+0.0005)
	}
	for _, c := range []struct {
		name    string
		trains  map[string][]float64
		stream  func(i int) float64
		subject string
		want    string
	}{
		{"one cell", map[string][]float64{"a": steady()}, nil, "units", "one cell is no ensemble"},
		{"no bursts", map[string][]float64{"a": {1, 3, 5}, "b": {2, 4}}, nil, "bursts", "there are no bursts at a threshold of 15 ms"},
		{"chance", map[string][]float64{"a": steady(), "b": steady()}, nil, "bursts", "most bursts may be chance"},
		{"refractory", map[string][]float64{"a": refractory, "b": regular}, nil, "units", "1 of 2 units with more than 0.5 % of intervals below 1 ms, which one cell cannot have (the worst is a"},
		{"lost unit", map[string][]float64{"a": poisson(rng, 8, 0, 30), "b": steady()}, nil, "units", "1 of 2 units do not keep their rate"},
		{"fading", map[string][]float64{"a": append(poisson(rng, 20, 0, 50), poisson(rng, 5, 50, 100)...), "b": steady()}, nil, "rate", "the ensemble's rate is not steady"},
		{"constant", map[string][]float64{"a": steady()}, func(i int) float64 { return 1 + 4e-16*float64(i%2) }, "drive", "the stream is as good as constant"},
		{"drifting stream", map[string][]float64{"a": steady()}, func(i int) float64 { return rng.NormFloat64() + float64(i)/5000 }, "drive", "the stream is not steady"},
		{"two-valued", map[string][]float64{"a": steady()}, func(i int) float64 { return math.Copysign(1, math.Sin(float64(i*i))) }, "drive", "the stream is not Gaussian"},
		{"slow", map[string][]float64{"a": steady()}, func(i int) float64 { return math.Sin(float64(i)/900) + math.Sin(float64(i)/531) }, "drive", "the stream is slow"},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Contains(t, about(inspectIt(t, build(t, 100, c.trains, c.stream)), c.subject), c.want)
		})
	}
}

func TestCorrelatedStreams(t *testing.T) {
	rng := rand.New(rand.NewPCG(10, 0))
	x, y := make([]float64, 5000), make([]float64, 5000)
	for i := range x {
		x[i] = rng.NormFloat64()
		y[i] = 0.4*x[i] + rng.NormFloat64()
	}
	r, err := scenarios.New(scenarios.Spec{Streams: []scenarios.Stream{{Name: "x", Samples: x}, {Name: "y", Samples: y}}, Dt: 0.01,
		Columns: scenarios.SpikeColumns{Unit: []string{"a", "b"}, TimeS: []float64{1, 2}}})
	require.NoError(t, err)
	doc := inspectIt(t, r)
	require.Len(t, doc.Correlations, 1)
	assert.InDelta(t, 0.4/math.Sqrt(1.16), float64(doc.Correlations[0].Correlation), 0.05)
	assert.Contains(t, about(doc, "x, y"), "the streams are correlated")
}

func TestTrialsOfOneCell(t *testing.T) {
	samples := make([]float64, 3000)
	rng := rand.New(rand.NewPCG(11, 0))
	for i := range 1000 {
		v := rng.NormFloat64()
		samples[i], samples[1000+i], samples[2000+i] = v, v, v
	}
	spec := scenarios.Spec{Streams: []scenarios.Stream{{Name: "x", Samples: samples}}, Dt: 0.01, TrialSamples: []int{1000, 1000, 1000}, Trials: scenarios.TrialsAsCells}
	for trial := range 3 {
		for _, s := range poisson(rng, 20, 0, 10) {
			spec.Columns.Unit = append(spec.Columns.Unit, "a")
			spec.Columns.TimeS = append(spec.Columns.TimeS, s)
			spec.Columns.Trial = append(spec.Columns.Trial, int64(trial))
		}
	}
	r, err := scenarios.New(spec)
	require.NoError(t, err)
	doc := inspectIt(t, r)
	assert.Equal(t, 3, doc.Recording.Cells)
	assert.Zero(t, doc.Pairs.Units)
	assert.Contains(t, about(doc, "unit pairs"), "not compared")

	spec.Trials = scenarios.FrozenRepeats
	r, err = scenarios.New(spec)
	require.NoError(t, err)
	doc = inspectIt(t, r)
	assert.Equal(t, 1000, doc.Streams[0].Samples, "one trial of a repeated input")
	assert.Equal(t, bench.Number(30), doc.Recording.DurationS)
	assert.False(t, doc.Steadiness.PValue.Known())
}

// The open recording of a hippocampal cell, where it is at hand: not part of the
// project.
func TestPlaceCell(t *testing.T) {
	const dir = "../../../shared/data/place-cell/"
	if _, err := os.Stat(dir + "spikes.csv"); err != nil {
		t.Skip("the recording is not here")
	}
	r, err := files.Read(files.Paths{Spikes: dir + "spikes.csv", Streams: dir + "streams.csv"}, files.Options{})
	require.NoError(t, err)
	doc := inspectIt(t, r)
	assert.Contains(t, about(doc, "units"), "one cell is no ensemble")
	assert.Contains(t, about(doc, "position_cm"), "the stream is slow")
	assert.Contains(t, about(doc, "position_cm"), "the stream is not Gaussian")
}

func TestInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := Run(ctx, bench.Defaults(), build(t, 5, map[string][]float64{"a": {1, 2}}, nil), "test")
	assert.ErrorIs(t, err, context.Canceled)
}

func TestNothingButNumbersInJSON(t *testing.T) {
	for _, trains := range []map[string][]float64{{"a": {1}}, {"a": {1}, "b": {1, 1.01}}, {"a": {1, 2, 3}}} {
		doc := inspectIt(t, build(t, 5, trains, nil))
		var b bytes.Buffer
		require.NoError(t, doc.JSON(&b))
		var back Document
		require.NoError(t, json.Unmarshal(b.Bytes(), &back))
		for _, w := range []func() error{
			func() error { return doc.Text(&b, TextOptions{}) }, func() error { return doc.CSV(&b) },
			func() error { return doc.Markdown(&b) }, func() error { return doc.LaTeX(&b) },
		} {
			b.Reset()
			require.NoError(t, w())
			assert.NotContains(t, b.String(), "NaN")
			assert.NotContains(t, b.String(), "Inf")
		}
	}
}

func TestTextIsFitForATerminal(t *testing.T) {
	rng := rand.New(rand.NewPCG(12, 0))
	trains := map[string][]float64{"evil\x1b[2Jname": poisson(rng, 5, 0, 20), "b": poisson(rng, 5, 0, 20)}
	doc := inspectIt(t, build(t, 20, trains, nil))
	for _, width := range []int{40, 60, 80, 120} {
		var b bytes.Buffer
		require.NoError(t, doc.Text(&b, TextOptions{Width: width}))
		assert.NotContains(t, b.String(), "\x1b")
		for _, line := range strings.Split(b.String(), "\n") {
			assert.LessOrEqual(t, len([]rune(line)), width, line)
		}
	}
	var colour, plainText bytes.Buffer
	require.NoError(t, doc.Text(&colour, TextOptions{Colour: true}))
	require.NoError(t, doc.Text(&plainText, TextOptions{}))
	assert.Contains(t, colour.String(), bold)
	assert.Equal(t, plainText.String(), strings.NewReplacer(bold, "", yellow, "", plain, "").Replace(colour.String()), "colour is never the only signal")
}

func TestFigures(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 0))
	doc := inspectIt(t, build(t, 20, map[string][]float64{"a": poisson(rng, 10, 0, 20)}, nil))
	figures := doc.Figures()
	require.Len(t, figures, 2)
	for _, f := range figures {
		var svg, png bytes.Buffer
		require.NoError(t, f.SVG(&svg))
		require.NoError(t, f.PNG(&png))
		assert.Contains(t, svg.String(), "<svg")
		assert.Equal(t, "\x89PNG", png.String()[:4])
	}
	assert.Len(t, inspectIt(t, build(t, 20, map[string][]float64{"a": {1}}, nil)).Figures(), 1)
}
