package stationarity

import (
	"math"
	"math/bits"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/stat/distuv"
)

// longestLag in samples bounds the memory of an autocorrelation; longer signals
// are cut into pieces whose products are averaged.
const longestLag = 1 << 18

// Autocorrelation is ρ(k) = c(k)/c(0) of x, for lags from 0 up to half of x or
// 2^18 samples, with c(k) = Σ (x_t − x̄)(x_{t+k} − x̄)/n, the mean removed once.
// The lags of a constant signal are NaN. dst is grown where it is too short; nil
// allocates.
func Autocorrelation(dst, x []float64) []float64 {
	n := len(x)
	lags := min(n/2+1, longestLag)
	dst = append(dst[:0], make([]float64, lags)...)
	if n == 0 {
		return dst
	}
	mean, scale := centre(x)
	// Each piece is multiplied with itself and with the lags that follow it.
	piece := min(n, longestLag)
	size := 1 << bits.Len(uint(piece+lags-1))
	plan := fourier.NewFFT(size)
	head, tail := make([]float64, size), make([]float64, size)
	var a, b, sum []complex128
	sum = make([]complex128, size/2+1)
	for lo := 0; lo < n; lo += piece {
		clear(head)
		clear(tail)
		for i := range size {
			if lo+i >= n || i >= piece+lags {
				break
			}
			v := (x[lo+i] - mean) / scale
			tail[i] = v
			if i < piece {
				head[i] = v
			}
		}
		a, b = plan.Coefficients(a, head), plan.Coefficients(b, tail)
		for k := range sum {
			sum[k] += complex(real(a[k])*real(b[k])+imag(a[k])*imag(b[k]), real(a[k])*imag(b[k])-imag(a[k])*real(b[k]))
		}
	}
	products := plan.Sequence(head, sum)
	for k := range dst {
		dst[k] = products[k] / products[0]
	}
	return dst
}

// powerSum is Σ |ρ(k)|^m over lags of both signs.
func powerSum(rho []float64, m int) float64 {
	sum := 1.0
	for _, r := range rho[1:] {
		r = math.Abs(r)
		p := r * r
		for range m - 2 {
			p *= r
		}
		sum += 2 * p
	}
	return sum
}

// squareSum estimates Σρ² over lags of both signs for n samples. Each ρ̂² is too
// large by the variance of ρ̂, about Σρ²·(1−k/n)/n: over all lags the sum would
// come out doubled.
func squareSum(rho []float64, n int) float64 {
	reach := float64(len(rho)-1) / float64(n)
	return math.Max(1, powerSum(rho, 2)/(1+2*reach-reach*reach))
}

// centre is the mean of x and its largest distance from it, by which values are
// divided before they are squared, so that tiny ones do not vanish.
func centre(x []float64) (mean, scale float64) {
	for _, v := range x {
		mean += v / float64(len(x))
	}
	for _, v := range x {
		scale = math.Max(scale, math.Abs(v-mean))
	}
	return mean, scale
}

// Independent is how many independent values the variance of x is worth:
// n/Σρ². For a stream of flat band f_c and duration T it is about 2 f_c T. It is
// 0 for a constant signal.
//
// Σρ² as the factor for second moments: Bartlett 1946, Suppl. J. R. Stat. Soc.
// 8:27–41.
func Independent(x []float64) float64 {
	if constant(x) {
		return 0
	}
	return float64(len(x)) / squareSum(Autocorrelation(nil, x), len(x))
}

// Correlation is Pearson's r of two signals sampled together, with the p-value
// of a two-sided test of r = 0 that counts n/Σρ_xρ_y independent pairs (Bartlett
// 1935, J. R. Stat. Soc. 98:536–543). r and p are NaN where a signal is constant.
// It panics on unequal lengths.
func Correlation(x, y []float64) (r, p float64) {
	if len(x) != len(y) {
		panic("stationarity: Correlation of signals of unequal length")
	}
	if constant(x) || constant(y) {
		return math.NaN(), math.NaN()
	}
	n := float64(len(x))
	mx, scaleX := centre(x)
	my, scaleY := centre(y)
	var sxx, syy, sxy float64
	for i := range x {
		dx, dy := (x[i]-mx)/scaleX, (y[i]-my)/scaleY
		sxx += dx * dx
		syy += dy * dy
		sxy += dx * dy
	}
	r = sxy / math.Sqrt(sxx*syy)
	rx, ry := Autocorrelation(nil, x), Autocorrelation(nil, y)
	factor := 1.0
	for k := 1; k < len(rx); k++ {
		factor += 2 * rx[k] * ry[k]
	}
	pairs := n / math.Max(factor, 1)
	if pairs < 4 {
		return r, math.NaN()
	}
	t := math.Abs(r) * math.Sqrt((pairs-2)/math.Max(1-r*r, 1e-300))
	return r, 2 * distuv.StudentsT{Mu: 0, Sigma: 1, Nu: pairs - 2}.Survival(t)
}

// constant reports whether x has no variance to speak of: all values equal to
// within rounding.
func constant(x []float64) bool {
	if len(x) == 0 {
		return true
	}
	low, high, size := x[0], x[0], 0.0
	for _, v := range x {
		low, high, size = math.Min(low, v), math.Max(high, v), math.Max(size, math.Abs(v))
	}
	return high-low <= 1e-12*size
}
