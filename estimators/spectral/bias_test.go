package spectral

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
)

// Values of the closed forms, checked once against SciPy 1.10 (digamma, hyp2f1)
// and quadrature.
func TestLogDetBiasClosedForms(t *testing.T) {
	assert.InDelta(t, -1.0/9, LogDetBias(10, 1, 1), 1e-10, "−1/(n−1), as far as digamma goes")
	assert.InDelta(t, -0.236111, LogDetBias(10, 2, 1), 1e-6)
	assert.InDelta(t, -0.813492, LogDetBias(10, 3, 2), 1e-6)
	assert.InDelta(t, -1.866667, LogDetBias(6, 3, 2), 1e-6)
	assert.InDelta(t, 1.17362, -LogDetBias(10, 3, 2)/math.Ln2, 1e-5, "bits/s a Hz")
	assert.InDelta(t, LogDetBias(12, 2, 3), LogDetBias(12, 3, 2), 1e-10, "symmetric in inputs and outputs")
	assert.InDelta(t, 7.59313, -100*LogDetBias(20, 1, 1)/math.Ln2, 1e-5, "naive inflation at n = 20 over 100 Hz")
	assert.InDelta(t, 1.0/81, LogDetNullVar(10, 1, 1), 1e-10, "1/(n−1)²")
	assert.InDelta(t, 0.114757052, LogCoherenceVar(10, 0.5), 1e-9)
	assert.InDelta(t, 1.0/81, LogCoherenceVar(10, 0), 1e-12)
}

// Pointwise null thresholds 1 − α^{1/(n−r−1)} (Halliday et al. 1995).
func TestNullThreshold(t *testing.T) {
	for n, want := range map[float64]float64{5: .527129, 10: .283129, 20: .145869, 100: .0298067} {
		assert.InDelta(t, want, NullThreshold(n, 0, 0.05), 1e-6)
	}
	assert.InDelta(t, .312344, NullThreshold(10, 1, 0.05), 1e-6)
}

func TestBiasPanicsWithoutEnoughEstimates(t *testing.T) {
	assert.Panics(t, func() { LogDetBias(2, 2, 1) })
	assert.NotPanics(t, func() { LogDetBias(2.5, 2, 1) })
}

// The bias holds for any true value: mean of the log-ratio over simulated
// complex Wishart matrices, 4 standard errors (false alarm 6e-5 a case).
func TestLogDetBiasBySimulation(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	cases := []struct{ n, p, q int }{{3, 1, 1}, {10, 1, 1}, {10, 2, 1}, {10, 2, 2}, {40, 3, 2}}
	const runs = 4000
	for _, c := range cases {
		for _, mscTrue := range []float64{0, 0.5, 0.9} {
			m := NewMatrix(c.p + c.q)
			sum, sum2 := 0.0, 0.0
			for range runs {
				m.Resize(c.p + c.q)
				entries := make([]complex128, (c.p+c.q)*(c.p+c.q))
				z := make([]complex128, c.p+c.q)
				for range c.n {
					for i := range z {
						z[i] = complex(rng.NormFloat64(), rng.NormFloat64())
					}
					// The last output shares power with the first input.
					g := complex(math.Sqrt(mscTrue), 0)
					z[c.p+c.q-1] = g*z[0] + complex(math.Sqrt(1-mscTrue), 0)*z[c.p+c.q-1]
					for i := range z {
						for j := range z {
							entries[i*len(z)+j] += z[i] * complex(real(z[j]), -imag(z[j]))
						}
					}
				}
				for i := range z {
					for j := range i + 1 {
						m.Set(i, j, entries[i*len(z)+j])
					}
				}
				v := -m.LogDetRatio(c.p)
				sum += v
				sum2 += v * v
			}
			mean := sum / runs
			se := math.Sqrt((sum2/runs - mean*mean) / runs)
			assert.InDelta(t, math.Log(1-mscTrue)+LogDetBias(float64(c.n), c.p, c.q), mean, 4*se, "%+v γ²=%g", c, mscTrue)
		}
	}
}

// Partial and multiple coherence of coherencies xy .6, xz .5, zy .5: .217778 and
// .413333 (arithmetic of Goodman 1963).
func TestMatrixPartialAndMultiple(t *testing.T) {
	m := NewMatrix(3)
	m.Resize(3)
	set := func(order [3]int) {
		c := [3][3]complex128{{1, .6, .5}, {.6, 1, .5}, {.5, .5, 1}} // x, y, z
		for i := range 3 {
			for j := range 3 {
				m.Set(i, j, c[order[i]][order[j]])
			}
		}
	}
	set([3]int{0, 2, 1}) // x, z, y: partial of x and y given z
	assert.InDelta(t, .217778, 1-math.Exp(-m.Partial()), 1e-6)
	assert.InDelta(t, .413333, 1-math.Exp(-m.LogDetRatio(2)), 1e-6)
}

func TestMatrixWithoutPowerCarriesNothing(t *testing.T) {
	m := NewMatrix(3)
	m.Resize(3)
	m.Set(0, 0, 2)
	m.Set(1, 1, 3)
	assert.Equal(t, 0.0, m.LogDetRatio(2))
	m.Set(2, 2, 1)
	assert.InDelta(t, 0, m.LogDetRatio(2), 1e-15)
}
