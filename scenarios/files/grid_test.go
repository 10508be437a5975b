package files

import (
	"math"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// written is the clock of n samples every dt seconds from start, with so many
// decimals; −1: as many as it takes.
func written(start, dt float64, n, places int) clock {
	c := clock{firstRow: 2}
	for i := range n {
		text := strconv.FormatFloat(start+float64(i)*dt, 'f', places, 64)
		v, _ := strconv.ParseFloat(text, 64)
		c.times = append(c.times, v)
		c.decimals = max(c.decimals, decimals([]byte(text)))
	}
	return c
}

func TestInterval(t *testing.T) {
	tests := []struct {
		name             string
		start, dt        float64
		samples, decimal int
	}{
		{name: "1 kHz", dt: 0.001, samples: 600_000, decimal: 3},
		{name: "1 kHz in full", dt: 0.001, samples: 60_000, decimal: -1},
		{name: "1 kHz, late start", start: 12.345, dt: 0.001, samples: 60_000, decimal: 3},
		{name: "since 1970", start: 1.7e9, dt: 0.001, samples: 60_000, decimal: 3},
		{name: "two samples", dt: 0.7, samples: 2, decimal: 1},
		{name: "seconds", dt: 2, samples: 100, decimal: 0},
		{name: "1024 Hz in microseconds", dt: 1.0 / 1024, samples: 50_000, decimal: 6},
		{name: "30 Hz in 10 ms", dt: 1.0 / 30, samples: 1000, decimal: 2},
		{name: "30 Hz in full", dt: 1.0 / 30, samples: 1000, decimal: -1},
		{name: "any number", dt: 0.00123456789123, samples: 10_000, decimal: -1},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			c := written(test.start, test.dt, test.samples, test.decimal)
			assert.Equal(t, test.dt, c.interval())
			assert.NoError(t, c.check())
		})
	}
}

// Where no simple value explains the digits, the mean step does.
func TestIntervalOfACrookedClock(t *testing.T) {
	for _, dt := range []float64{math.Pi / 1000, 1001.0 / 30_000} {
		c := written(3, dt, 10_000, 6)
		assert.InDelta(t, dt, c.interval(), 1e-6/9_999, "within the last digit over the whole length")
		assert.NoError(t, c.check())
	}
}

func TestCheckAllowsJitter(t *testing.T) {
	c := written(0, 0.001, 10_000, 3)
	c.decimals = 9
	for i := range c.times {
		c.times[i] += 4e-6 * math.Sin(float64(i)) // steps within 0.8 %
	}
	require.NoError(t, c.check())
	c.times[5000] += 30e-6
	assert.EqualError(t, c.check(), "row 5002: time_s steps by 0.0010287 s where 0.001 s is usual: resample the streams uniformly, or split them into trials at gaps")
}
