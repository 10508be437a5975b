package spectral

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// LogDetBias is the bias, in nats, of ln[det Ŝ/(det Ŝxx det Ŝyy)] for p inputs
// and q outputs when n independent complex estimates are averaged: for every
// true value, E = ln(ratio) + LogDetBias(n, p, q). It is negative, and for
// p = q = 1 it is −1/(n−1), the bias of ln(1−γ̂²).
//
// Derived from E ln det W = ln det S + Σ ψ(n−i+1) of a complex Wishart matrix
// (Goodman 1963, Ann. Math. Stat. 34:152–177); verified by simulation.
// It panics unless n > p+q−1.
func LogDetBias(n float64, p, q int) float64 {
	mustExceed(n, p, q)
	sum := 0.0
	for j := 1; j <= q; j++ {
		sum += mathext.Digamma(n-float64(p+j-1)) - mathext.Digamma(n-float64(j-1))
	}
	return sum
}

// LogDetBiasReal is LogDetBias at frequency 0 and Nyquist, where transforms are
// real and n averages have half the degrees of freedom.
func LogDetBiasReal(n float64, p, q int) float64 {
	mustExceed(n, p, q)
	sum := 0.0
	for j := 1; j <= q; j++ {
		sum += mathext.Digamma((n-float64(p+j-1))/2) - mathext.Digamma((n-float64(j-1))/2)
	}
	return sum
}

// LogDetNullVar is the variance, in nats², of ln[det Ŝ/(det Ŝxx det Ŝyy)] at one
// frequency when inputs and outputs are independent: the ratio is a product of
// independent Beta(n−p−j+1, p) variables (Wilks 1932, Biometrika 24:471–494).
// For p = q = 1 it is 1/(n−1)².
func LogDetNullVar(n float64, p, q int) float64 {
	mustExceed(n, p, q)
	sum := 0.0
	for j := 1; j <= q; j++ {
		sum += trigamma(n-float64(p+j-1)) - trigamma(n-float64(j-1))
	}
	return sum
}

// LogCoherenceVar is the exact variance, in nats², of ln(1−γ̂²) for
// magnitude-squared coherence msc: 1/(n−1)² + 2 Σ ((k−1)!)² γ^{2k}/(k! (n)_k),
// (n)_k the rising factorial. Derived from the moments of 1−γ̂² (Carter, Knapp
// and Nuttall 1973, IEEE Trans. Audio Electroacoust. 21:337–344).
func LogCoherenceVar(n, msc float64) float64 {
	mustExceed(n, 1, 1)
	// term_k = ((k−1)!)² γ^{2k} / (k! (n)_k); term_{k+1}/term_k = k² γ²/((k+1)(n+k)).
	term := msc / n
	sum := 0.0
	for k := 1.0; term > 1e-18*(sum+1e-300) && k < 1e6; k++ {
		sum += term
		term *= k * k * msc / ((k + 1) * (n + k))
	}
	return 1/((n-1)*(n-1)) + 2*sum
}

// NullThreshold is the level that γ̂² of independent signals exceeds with
// probability alpha at one frequency: 1 − α^{1/(n−r−1)}, where r further series
// have been partialled out (Halliday et al. 1995, Prog. Biophys. Mol. Biol.
// 64:237–278).
func NullThreshold(n float64, r int, alpha float64) float64 {
	return 1 - math.Pow(alpha, 1/(n-float64(r)-1))
}

// Debias corrects a magnitude-squared coherence so that ln(1−γ²) is unbiased:
// 1 − (1−γ̂²) e^{1/(n−r−1)}, with r series partialled out. It may be negative.
func Debias(msc, n float64, r int) float64 {
	return 1 - (1-msc)*math.Exp(1/(n-float64(r)-1))
}

// CoherenceInterval is the interval of γ² from the Fisher transform of |γ̂|:
// tanh(z − b ± q√b), b = 1/(2n−2), q the normal quantile (Enochson and Goodman
// 1965; Thomson and Chave 1991). It is poor near zero, where NullThreshold serves.
func CoherenceInterval(msc, n, q float64) (low, high float64) {
	b := 1 / (2*n - 2)
	z := math.Atanh(math.Sqrt(math.Min(math.Max(msc, 0), 1-1e-15))) - b
	lo := math.Tanh(math.Max(z-q*math.Sqrt(b), 0))
	hi := math.Tanh(math.Max(z+q*math.Sqrt(b), 0))
	return lo * lo, hi * hi
}

// trigamma is ψ′(x), the Hurwitz zeta function ζ(2, x).
func trigamma(x float64) float64 { return mathext.Zeta(2, x) }

func mustExceed(n float64, p, q int) {
	if !(n > float64(p+q-1)) {
		panic("spectral: the number of averaged estimates must exceed inputs + outputs − 1")
	}
}
