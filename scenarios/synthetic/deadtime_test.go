package synthetic

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"gonum.org/v1/gonum/stat/distuv"
)

// Dead-time response and renewal spectrum: λ₀ = 100/s, τ = 5 ms give r₀ = 66.6667,
// S(0) = 29.6296, S(50) = 36.2464, S(100) = 60.5334 and χ(100 Hz) = .605333 +
// .192684i (Cox 1962; Franklin and Bair 1995; values agree with the renewal
// formula evaluated in SciPy 1.10).
func TestDeadTimeResponse(t *testing.T) {
	e := newDeadTime(100, 0.005, 0, 20)
	assert.InDelta(t, 66.6667, e.rate(), 1e-4)
	for f, want := range map[float64]float64{0: 29.6296, 50: 36.2464, 100: 60.5334} {
		assert.InDelta(t, want, e.rate()+e.excess(f), 1e-4)
	}
	chi := complex(1-e.rate()*0.005, 0) * e.d(100)
	assert.InDelta(t, 0, cmplx.Abs(chi-complex(.605333, .192684)), 1e-6)
}

// A stream slow against the dead time: rate, gain and private spectrum are means
// over λ₀(1 + a z) of λ/(1+λτ), z λ/(1+λτ) and λ/(1+λτ)³, and the closed form is
// their expansion: what it leaves out falls as a⁴ (a⁵ in the gain), so 16-fold
// where a is halved.
func TestSlowStreamIsExpanded(t *testing.T) {
	const hazard, dead = 10, 0.03
	left := func(a float64) (rate, gain, private float64) {
		e := newDeadTime(hazard, dead, a, 1e-3)
		for z := -12.0; z <= 12; z += 0.01 {
			w := 0.01 * distuv.UnitNormal.Prob(z)
			l := hazard * (1 + a*z)
			rate += w * l / (1 + l*dead)
			gain += w * z * l / (1 + l*dead)
			private += w * l / math.Pow(1+l*dead, 3)
		}
		return e.rate()/rate - 1, real(e.gain(0))/gain - 1, (e.rate()+e.excess(0))/private - 1
	}
	r1, g1, p1 := left(0.08)
	r2, g2, p2 := left(0.04)
	// The next order changes the ratio by a relative a².
	assert.InEpsilon(t, 16, r1/r2, 0.03)
	assert.InEpsilon(t, 16, g1/g2, 0.03)
	assert.InEpsilon(t, 16, p1/p2, 0.03)
	assert.Less(t, math.Abs(p1), 1e-4)
}

// Smoothing by a flat stream, against sums over its band.
func TestSmoothing(t *testing.T) {
	e, rest := newDeadTime(8, 0.03, 0.3, 20), newDeadTime(8, 0.03, 0, 20)
	const n = 4000
	for _, by := range []flatBand{5, 30} {
		for _, f := range []float64{0, 7, 22} {
			var excess, intensity float64
			for i := range n {
				nu := float64(by) * (2*(float64(i)+0.5)/n - 1)
				excess += rest.excess(f-nu) * e.rate() / rest.rate() / n
				intensity += e.intensity(f-nu) / n
			}
			assert.InEpsilon(t, excess, e.excessOver(f, by), 1e-3, "midpoint rule")
			assert.InEpsilon(t, intensity, e.intensityOver(f, by), 1e-3, "steps of S_A")
		}
	}
}
