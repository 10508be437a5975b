package stationarity

import "math"

// Shape is the shape of a signal's distribution against a Gaussian one.
type Shape struct {
	Mean, SD       float64
	Skewness       float64 // 0 for a Gaussian signal
	ExcessKurtosis float64 // 0 for a Gaussian signal
	// PValue of the test that both are 0, autocorrelation allowed for; NaN where
	// there are fewer than 20 independent values, or none that differ.
	PValue float64
	// Independent is the number of independent values that the kurtosis is worth.
	Independent float64
}

// Bounds of what Visible calls a departure: ours. Uniform signals have an excess
// kurtosis of −1.2, two-valued ones −2, an exponential one a skewness of 2.
const (
	visibleSkewness = 0.25
	visibleKurtosis = 0.5
	visibleP        = 0.001
)

// Visible reports whether the signal is surely (p < 0.001) and by an amount that
// matters (|skewness| ≥ 0.25 or |excess kurtosis| ≥ 0.5) not Gaussian.
func (s Shape) Visible() bool {
	return s.PValue < visibleP && (math.Abs(s.Skewness) >= visibleSkewness || math.Abs(s.ExcessKurtosis) >= visibleKurtosis)
}

// fewestIndependent is where the approximations of the test end (Anscombe and
// Glynn give theirs for n ≥ 20).
const fewestIndependent = 20

// Gaussianity tests whether x is Gaussian by its skewness and kurtosis. Each is
// brought to a normal variable for its own number of independent values, n/Σ|ρ|³
// and n/Σρ⁴, and the sum of squares is referred to χ² with two degrees of
// freedom.
//
// Variances under autocorrelation: Lomnicki 1961, Metrika 4:37–62 (with ρ³; its
// modulus, used here, errs on the safe side). Normal forms: D'Agostino 1970,
// Biometrika 57:679–681; Anscombe and Glynn 1983, Biometrika 70:227–234. Their
// use with effective numbers is ours, verified by simulation: at a nominal 0.1 %
// fewer than 0.5 % of Gaussian signals are called otherwise.
func Gaussianity(x []float64) Shape {
	n := float64(len(x))
	s := Shape{PValue: math.NaN()}
	var scale float64
	s.Mean, scale = centre(x)
	if constant(x) {
		return s
	}
	var m2, m3, m4 float64
	for _, v := range x {
		d := (v - s.Mean) / scale
		m2 += d * d / n
	}
	s.SD = math.Sqrt(m2) * scale
	for _, v := range x {
		d := (v - s.Mean) / s.SD
		m3 += d * d * d / n
		m4 += d * d * d * d / n
	}
	s.Skewness, s.ExcessKurtosis = m3, m4-3
	rho := Autocorrelation(nil, x)
	forSkewness := n / powerSum(rho, 3)
	s.Independent = n / powerSum(rho, 4)
	if math.Min(forSkewness, s.Independent) < fewestIndependent {
		return s
	}
	zs, zk := normalSkewness(m3, forSkewness), normalKurtosis(m4, s.Independent)
	s.PValue = math.Exp(-(zs*zs + zk*zk) / 2)
	return s
}

// normalSkewness brings the skewness of n Gaussian values to a normal variable.
func normalSkewness(skewness, n float64) float64 {
	y := skewness * math.Sqrt((n+1)*(n+3)/(6*(n-2)))
	b := 3 * (n*n + 27*n - 70) * (n + 1) * (n + 3) / ((n - 2) * (n + 5) * (n + 7) * (n + 9))
	w2 := math.Sqrt(2*(b-1)) - 1
	a := math.Sqrt(2 / (w2 - 1))
	return math.Asinh(y/a) / math.Sqrt(0.5*math.Log(w2))
}

// normalKurtosis brings the kurtosis (3 on average) of n Gaussian values to a
// normal variable.
func normalKurtosis(kurtosis, n float64) float64 {
	mean := 3 * (n - 1) / (n + 1)
	variance := 24 * n * (n - 2) * (n - 3) / ((n + 1) * (n + 1) * (n + 3) * (n + 5))
	x := (kurtosis - mean) / math.Sqrt(variance)
	skew := 6 * (n*n - 5*n + 2) / ((n + 7) * (n + 9)) * math.Sqrt(6*(n+3)*(n+5)/(n*(n-2)*(n-3)))
	a := 6 + 8/skew*(2/skew+math.Sqrt(1+4/(skew*skew)))
	cube := (1 - 2/a) / (1 + x*math.Sqrt(2/(a-4)))
	return (1 - 2/(9*a) - math.Cbrt(cube)) / math.Sqrt(2/(9*a))
}
