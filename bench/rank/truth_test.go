package rank

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"

	"codeassay/bench"
	"codeassay/decoders"
)

// poissonMarks are spectra of cells without dead time: event rate λ(1+a x),
// burst probability p + b y, doublets only, x and y independent and flat with
// density s below 20 Hz. Marked Poisson trains: private spectra are the rates.
type poissonMarks struct{ rate, a, p, b, s float64 }

func (m poissonMarks) Streams(f float64) [][]complex128 {
	s := complex(0, 0)
	if f < 20 {
		s = complex(m.s, 0)
	}
	return [][]complex128{{s, 0}, {0, s}}
}

func (m poissonMarks) Private(float64) (out [5][5]complex128) {
	out[0][0], out[1][1] = complex(m.rate*(1-m.p), 0), complex(m.rate*m.p, 0)
	return out
}

func (m poissonMarks) Shared(f float64) (out [5][5]complex128) {
	c := m.Cross(f)
	s := m.Streams(f)[0][0]
	if s == 0 {
		return out
	}
	for i := range out {
		for j := range out {
			for r := range 2 {
				out[i][j] += c[i][r] * c[j][r] / s
			}
		}
	}
	return out
}

func (m poissonMarks) Cross(f float64) (out [5][]complex128) {
	s := real(m.Streams(f)[0][0])
	out = [5][]complex128{{0, 0}, {0, 0}, {0, 0}, {0, 0}, {0, 0}}
	out[0] = []complex128{complex(m.rate*m.a*(1-m.p)*s, 0), complex(-m.rate*m.b*s, 0)}
	out[1] = []complex128{complex(m.rate*m.a*m.p*s, 0), complex(m.rate*m.b*s, 0)}
	return out
}

func trains(name string) decoders.Code {
	for _, c := range decoders.BuiltIn() {
		if c.Name == name {
			return c
		}
	}
	panic(name)
}

// Superposed Poisson cells: with r = 40 and |H|²S = 10, γ² = .2, .5, .8 for
// N = 1, 4, 16, so 20 log2(1/(1−γ²)) bits/s over 20 Hz; the residual has signal
// N²λ²b²S over noise Nλp(1−p).
func TestTruthOfSuperposedCells(t *testing.T) {
	m := poissonMarks{rate: 40, a: 0.5, p: 0.25, b: 0.2, s: 10.0 / 400}
	truth := &Truth{Spectra: m, BurstShare: m.p}
	band := bench.Band{High: 20}
	w, ok := truth.Weights(trains("event-rate"))
	assert.True(t, ok)
	for n, msc := range map[int]float64{1: .2, 4: .5, 16: .8} {
		assert.InDelta(t, -20*math.Log2(1-msc), float64(truth.Rate([][5]float64{w}, n, band, 0, false)), 1e-9)
		assert.InDelta(t, 0, float64(truth.Rate([][5]float64{w}, n, band, 1, false)), 1e-9)
	}
	residual, ok := truth.Weights(trains("burst-residual"))
	assert.True(t, ok)
	assert.Equal(t, [5]float64{-.25, .75, .75, .75, 0}, residual)
	snr := 16 * m.rate * m.b * m.b * m.s / (m.p * (1 - m.p))
	assert.InDelta(t, 20*math.Log2(1+snr), float64(truth.Rate([][5]float64{residual}, 16, band, 1, false)), 1e-9)
	// Event rate and residual are independent channels: the pair carries their sum.
	joint := truth.Rate([][5]float64{w, residual}, 16, band, -1, false)
	assert.InDelta(t, -20*math.Log2(.2)+20*math.Log2(1+snr), float64(joint), 1e-9)
	// The burst rate mixes both streams: given one, more is known of the other.
	bursts, _ := truth.Weights(trains("burst-rate"))
	plain := truth.Rate([][5]float64{bursts}, 16, band, 1, false)
	given := truth.Rate([][5]float64{bursts}, 16, band, 1, true)
	assert.Greater(t, float64(given), float64(plain))
	// Chain rule: about both = about one + about the other, given the one.
	other := truth.Rate([][5]float64{bursts}, 16, band, 0, false)
	assert.InDelta(t, float64(truth.Rate([][5]float64{bursts}, 16, band, -1, false)), float64(other+given), 1e-9)
	_, ok = truth.Weights(trains("burst-fraction"))
	assert.False(t, ok, "a ratio has no closed form")
}
