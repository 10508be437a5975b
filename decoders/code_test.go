package decoders_test

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/decoders"
	"codeassay/scenarios"
)

func builtIn(t *testing.T, name string) decoders.Code {
	for _, c := range decoders.BuiltIn() {
		if c.Name == name {
			return c
		}
	}
	require.Fail(t, "no built-in code "+name)
	return decoders.Code{}
}

func TestBuiltInCodes(t *testing.T) {
	var names []string
	for _, c := range decoders.BuiltIn() {
		names = append(names, c.Name)
		assert.NotEmpty(t, c.Describe, c.Name)
	}
	assert.Equal(t, []string{"spike-rate", "event-rate", "singlet-rate", "burst-rate", "burst-fraction", "burst-fraction-raw", "burst-residual", "burst-size"}, names)

	// Trains: spikes, events of 1, 2, 3, ≥ 4 spikes, own baseline × events.
	assert.Equal(t, [6]float64{1}, builtIn(t, "spike-rate").Trains())
	assert.Equal(t, [6]float64{0, 1, 1, 1, 1, 0}, builtIn(t, "event-rate").Trains())
	assert.Equal(t, [6]float64{0, 1, 0, 0, 0, 0}, builtIn(t, "singlet-rate").Trains())
	assert.Equal(t, [6]float64{0, 0, 1, 1, 1, 0}, builtIn(t, "burst-rate").Trains())
	assert.Equal(t, [6]float64{0, 0, 1, 1, 1, -1}, builtIn(t, "burst-residual").Trains())

	shrunken, raw, size := builtIn(t, "burst-fraction"), builtIn(t, "burst-fraction-raw"), builtIn(t, "burst-size")
	assert.False(t, shrunken.Linear())
	assert.Equal(t, 16.0, shrunken.Prior(16))
	assert.Equal(t, 0.0, raw.Prior(16))
	assert.Equal(t, shrunken.Weights, raw.Weights)
	assert.Equal(t, [4]float64{0, 2, 3, 4}, size.Weights)
	assert.Equal(t, [4]float64{0, 1, 1, 1}, size.Over)
	assert.Panics(t, func() { raw.Trains() })

	decoders.BuiltIn()[1].Weights[0] = 5
	assert.Equal(t, 1.0, builtIn(t, "event-rate").Weights[0])
}

func TestFromWeights(t *testing.T) {
	c, err := decoders.FromWeights("doublet-share", []float64{0, 1, 0}, []float64{1})
	require.NoError(t, err)
	assert.Equal(t, [4]float64{0, 1, 0, 0}, c.Weights)
	assert.Equal(t, [4]float64{1, 1, 1, 1}, c.Over)
	assert.False(t, c.Linear())
	assert.Equal(t, 3.0, c.Prior(3))

	c, err = decoders.FromWeights("contrast", []float64{-1, 0.5}, nil)
	require.NoError(t, err)
	assert.Equal(t, [6]float64{0, -1, 0.5, 0.5, 0.5, 0}, c.Trains())
	assert.Equal(t, 0.0, c.Prior(3))

	one := []float64{1}
	for _, bad := range []struct {
		name          string
		weights, over []float64
		want          string
	}{
		{"", one, nil, `[[code]] without a name: give it one`},
		{"a+b", one, nil, `[[code]] name = "a+b": a name has no spaces and no + (which joins pairs)`},
		{"a b", one, nil, `[[code]] name = "a b": a name has no spaces and no + (which joins pairs)`},
		{"burst-rate", one, nil, `[[code]] name = "burst-rate": a built-in code has this name; choose another`},
		{"x", nil, nil, `[[code]] x: weights has 0 numbers: give one to four, for events of 1, 2, 3 and ≥ 4 spikes (the last holds for longer ones)`},
		{"x", []float64{1, 2, 3, 4, 5}, nil, `[[code]] x: weights has 5 numbers: give one to four, for events of 1, 2, 3 and ≥ 4 spikes (the last holds for longer ones)`},
		{"x", []float64{0, 0}, nil, `[[code]] x: weights is all zeros: give some event size a weight`},
		{"x", []float64{math.NaN()}, nil, `[[code]] x: weights has a number that is not finite`},
		{"x", one, []float64{math.Inf(1)}, `[[code]] x: over has a number that is not finite`},
		{"x", one, []float64{0}, `[[code]] x: over is all zeros: give some event size a weight`},
		{"x", one, []float64{1, -1}, `[[code]] x: over = 1, -1, -1, -1: a divisor with negative weights can vanish; use weights of 0 and above`},
	} {
		_, err := decoders.FromWeights(bad.name, bad.weights, bad.over)
		assert.EqualError(t, err, bad.want)
	}
}

func TestLabelsToKinds(t *testing.T) {
	const f, i, s = scenarios.FirstSpike, scenarios.InnerSpike, scenarios.SingleSpike
	labels := []scenarios.EventLabel{s, f, i, f, i, i, s, f, i, i, i, i, f}
	dirty := []decoders.Kind{9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9}
	got, err := decoders.LabelsToKinds(dirty, labels)
	require.NoError(t, err)
	assert.Equal(t, []decoders.Kind{1, 2, 0, 3, 0, 0, 1, 4, 0, 0, 0, 0, 1}, got)
	assert.Equal(t, &dirty[0], &got[0])

	_, err = decoders.LabelsToKinds(nil, []scenarios.EventLabel{f, i, s, i})
	assert.EqualError(t, err, "spike 3 is labelled inner, but no burst is going on: label the burst's first spike first")
	_, err = decoders.LabelsToKinds(nil, []scenarios.EventLabel{s, scenarios.Unlabelled})
	assert.EqualError(t, err, "spike 1 has no event label: label it first, inner or single, or label no spike at all")
}
