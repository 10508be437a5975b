package spectral

import (
	"math"
)

// maxCoherence bounds γ̂² away from 1, so that signals which determine each
// other give a large finite rate: 52 bits are what a float64 can tell apart.
const maxCoherence = 1 - 1.0/(1<<52)

// LogCoherence is −Σ w ln(1−γ̂²) over the band, in nats/s, from sums of auto- and
// cross-spectra on the design's bins (any common scale; the raw estimate, not
// corrected for bias). Cells in which either signal has no power add nothing.
func (b Band) LogCoherence(sxx, syy []float64, sxy []complex128) float64 {
	sum, product, weight := 0.0, 1.0, 0.0
	for i, w := range b.Weight {
		if w == 0 {
			continue
		}
		k := b.First + i
		d := sxx[k] * syy[k]
		if d == 0 {
			continue
		}
		c := sxy[k]
		q := 1 - (real(c)*real(c)+imag(c)*imag(c))/d
		if q < 1-maxCoherence {
			q = 1 - maxCoherence
		}
		// Equal weights share one logarithm of a product: far cheaper than
		// one each. 2^-52 to the 16th stays clear of underflow.
		if w != weight || product < 1e-250 {
			sum -= weight * math.Log(product)
			product, weight = 1, w
		}
		product *= q
	}
	return sum - weight*math.Log(product)
}

// Matrix is a scratch Hermitian matrix of cross-spectra at one frequency, row
// by row; only the lower triangle and the diagonal are read.
type Matrix struct {
	size int
	a, l []complex128
}

// NewMatrix allocates for up to size signals.
func NewMatrix(size int) *Matrix {
	return &Matrix{size: size, a: make([]complex128, size*size), l: make([]complex128, size*size)}
}

// Resize sets the number of signals, at most what was allocated, and clears.
func (m *Matrix) Resize(size int) {
	if size*size > len(m.l) {
		panic("spectral: Matrix resized beyond its allocation")
	}
	m.size = size
	m.a = m.a[:size*size]
	clear(m.a)
}

// Set fills the entry (i, j) and its mirror.
func (m *Matrix) Set(i, j int, v complex128) {
	m.a[i*m.size+j] = v
	m.a[j*m.size+i] = complex(real(v), -imag(v))
}

// LogDetRatio is −ln[det S/(det Sxx det Syy)], in nats, where the first p
// signals are the inputs (Goodman 1963): the information between inputs and
// outputs at this frequency. A signal without power carries none.
func (m *Matrix) LogDetRatio(p int) float64 {
	// The pivots of the first p rows are those of Sxx, so one factorisation of
	// S and one of Syy suffice: −ln ratio = ln det Syy − Σ_{i≥p} ln pivot_i.
	all := m.logPivots(0, p)
	return m.logPivots(p, p) - all
}

// Partial is −ln(1−γ²) between signal 0 and the last signal, given all between
// (partial coherence, Goodman 1963).
func (m *Matrix) Partial() float64 {
	n := m.size
	// Conditional variance of the last given 1…n−2, over that given 0…n−2.
	return m.logPivots(1, n-1) - m.logPivots(0, n-1)
}

// logPivots factors the sub-matrix of signals from … size−1 and returns the sum
// of ln pivot over signals first … size−1.
func (m *Matrix) logPivots(from, first int) float64 {
	n := m.size
	sum := 0.0
	for i := from; i < n; i++ {
		diagonal := real(m.a[i*n+i])
		pivot := diagonal
		for j := from; j <= i; j++ {
			v := m.a[i*n+j]
			for k := from; k < j; k++ {
				u := m.l[j*n+k]
				v -= m.l[i*n+k] * complex(real(u), -imag(u))
			}
			if j < i {
				if d := m.l[j*n+j]; d != 0 {
					m.l[i*n+j] = v / d
				} else {
					m.l[i*n+j] = 0
				}
				continue
			}
			pivot = math.Max(real(v), diagonal*(1-maxCoherence))
		}
		m.l[i*n+i] = complex(math.Sqrt(pivot), 0)
		if i >= first && pivot > 0 {
			sum += math.Log(pivot)
		}
	}
	return sum
}
