package fourier

import (
	"fmt"
	"math"
)

// Hann is the periodic Hann window of n samples, ½(1 − cos 2πt/n) (Harris 1978,
// Proc. IEEE 66:51–83).
func Hann(n int) []float64 {
	w := make([]float64, n)
	for t := range w {
		w[t] = 0.5 - 0.5*math.Cos(2*math.Pi*float64(t)/float64(n))
	}
	return w
}

// Slepian returns the first k discrete prolate spheroidal sequences of n samples
// and time-half-bandwidth product nw, each of unit energy (Slepian 1978, Bell
// Syst. Tech. J. 57:1371–1430). Symmetric ones have a positive mean;
// antisymmetric ones begin with a positive lobe. It panics unless 0 < nw < n/2
// and 0 < k ≤ n.
//
// They are eigenvectors of a tridiagonal matrix that commutes with the defining
// kernel and, unlike it, has well separated eigenvalues: each is found by
// bisection on Sturm counts, then its vector by inverse iteration. Symmetric and
// antisymmetric ones are solved apart, on half the samples.
func Slepian(n int, nw float64, k int) [][]float64 {
	if !(nw > 0 && nw < float64(n)/2) || k < 1 || k > n {
		panic(fmt.Sprintf("fourier: %d tapers of %d samples with half-bandwidth %g", k, n, nw))
	}
	cos := math.Cos(2 * math.Pi * nw / float64(n))
	diagonal := func(i int) float64 {
		c := (float64(n) - 1 - 2*float64(i)) / 2
		return c * c * cos
	}
	off := func(i int) float64 { return float64(i) * float64(n-i) / 2 } // between i−1 and i

	tapers := make([][]float64, k)
	for parity := range 2 {
		odd := parity == 1
		half := n / 2
		if n%2 == 1 && !odd {
			half++ // the middle sample belongs to the symmetric ones
		}
		if half == 0 {
			continue
		}
		d, e := make([]float64, half), make([]float64, half) // e[i] couples i−1 and i
		for i := range half {
			d[i] = diagonal(i)
			if i > 0 {
				e[i] = off(i)
			}
		}
		switch {
		case n%2 == 0 && !odd:
			d[half-1] += off(half)
		case n%2 == 0:
			d[half-1] -= off(half)
		case !odd && half > 1:
			// The middle couples to both sides: scaling it by √2 keeps the matrix symmetric.
			e[half-1] *= math.Sqrt2
		}
		for order := parity; order < k; order += 2 {
			value := largest(d, e, order/2)
			v := inverseIterate(d, e, value)
			tapers[order] = unfold(v, n, odd)
		}
	}
	return tapers
}

// largest is the rank-th largest eigenvalue (from 0) of the symmetric
// tridiagonal matrix, by bisection to the last bit.
func largest(d, e []float64, rank int) float64 {
	low, high := math.Inf(1), math.Inf(-1)
	for i := range d {
		r := math.Abs(e[i])
		if i+1 < len(e) {
			r += math.Abs(e[i+1])
		}
		low, high = math.Min(low, d[i]-r), math.Max(high, d[i]+r)
	}
	for {
		mid := low + (high-low)/2
		if mid <= low || mid >= high {
			return mid
		}
		if above(d, e, mid) > rank {
			low = mid
		} else {
			high = mid
		}
	}
}

// above counts the eigenvalues larger than x (Sturm's sequence).
func above(d, e []float64, x float64) int {
	n, q := 0, 1.0
	for i := range d {
		q = d[i] - x - e[i]*e[i]/q
		if q == 0 {
			q = -math.SmallestNonzeroFloat64 * 1e30
		}
		if q > 0 {
			n++
		}
	}
	return n
}

// inverseIterate finds the unit eigenvector of the eigenvalue nearest to value:
// three solves of (T − value) x = b by Gaussian elimination with row exchanges.
func inverseIterate(d, e []float64, value float64) []float64 {
	n := len(d)
	x := make([]float64, n)
	for i := range x {
		x[i] = 1 + 0.01*math.Cos(float64(i)) // no special symmetry
	}
	u0, u1, u2 := make([]float64, n), make([]float64, n), make([]float64, n)
	for range 3 {
		// Row i of the elimination: pivot u0, then the entries right of it.
		p, q := d[0]-value, 0.0
		if n > 1 {
			q = e[1]
		}
		for i := range n {
			if i == n-1 {
				u0[i], u1[i], u2[i] = p, 0, 0
				break
			}
			below, diag, right := e[i+1], d[i+1]-value, 0.0
			if i+2 < n {
				right = e[i+2]
			}
			if math.Abs(p) >= math.Abs(below) {
				u0[i], u1[i], u2[i] = p, q, 0
				f := below / p
				p, q = diag-f*q, right
				x[i+1] -= f * x[i]
			} else {
				u0[i], u1[i], u2[i] = below, diag, right
				f := p / below
				p, q = q-f*diag, -f*right
				x[i], x[i+1] = x[i+1], x[i]-f*x[i+1]
			}
		}
		for i := n - 1; i >= 0; i-- {
			v := x[i]
			if i+1 < n {
				v -= u1[i] * x[i+1]
			}
			if i+2 < n {
				v -= u2[i] * x[i+2]
			}
			pivot := u0[i]
			if pivot == 0 {
				pivot = 1e-300 * (1 + math.Abs(value))
			}
			x[i] = v / pivot
			// Near-singular by design: keep the growing vector in range.
			if math.Abs(x[i]) > 1e200 {
				for j := range x {
					x[j] *= 1e-200
				}
			}
		}
		norm := 0.0
		for _, v := range x {
			norm = math.Max(norm, math.Abs(v))
		}
		sum := 0.0
		for i := range x {
			x[i] /= norm
			sum += x[i] * x[i]
		}
		for i := range x {
			x[i] /= math.Sqrt(sum)
		}
	}
	return x
}

// unfold mirrors a half solution to n samples of unit energy and fixes its sign.
func unfold(half []float64, n int, odd bool) []float64 {
	v := make([]float64, n)
	for i, x := range half {
		mirror := n - 1 - i
		if mirror == i {
			v[i] = x // unit norm with the √2 scaling of its coupling
			continue
		}
		v[i] = x / math.Sqrt2
		v[mirror] = v[i]
		if odd {
			v[mirror] = -v[i]
		}
	}
	sign := 0.0
	if odd {
		for i := range n {
			sign += float64(n-1-2*i) * v[i] // first lobe positive
		}
	} else {
		for _, x := range v {
			sign += x
		}
	}
	if sign < 0 {
		for i := range v {
			v[i] = -v[i]
		}
	}
	return v
}
