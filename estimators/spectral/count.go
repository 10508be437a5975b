package spectral

import (
	"math"
	"math/cmplx"
)

// Tally counts the estimates behind an average. It is additive over stretches,
// so leaving a block out is a subtraction.
type Tally struct {
	Items float64 // segments × tapers
	// Overlapped is Σ over items and items of their squared overlap
	// correlation; equal to Items where segments are disjoint.
	Overlapped float64
}

// Add returns t + o.
func (t Tally) Add(o Tally) Tally { return Tally{t.Items + o.Items, t.Overlapped + o.Overlapped} }

// Sub returns t − o.
func (t Tally) Sub(o Tally) Tally { return Tally{t.Items - o.Items, t.Overlapped - o.Overlapped} }

// NEff is the number of independent estimates with the same variance (Welch
// 1967; Percival and Walden 1993): items²/Σρ².
func (t Tally) NEff() float64 {
	if t.Overlapped == 0 {
		return 0
	}
	return t.Items * t.Items / t.Overlapped
}

// Tally counts the estimates of one stretch of n samples.
func (d *Design) Tally(n int) Tally {
	m := d.Segments(n)
	items := float64(m * len(d.tapers))
	overlapped := items
	for lag := 1; lag*d.hop < d.length && lag < m; lag++ {
		rho := d.overlap(lag)
		overlapped += 2 * float64(m-lag) * rho * rho
	}
	return Tally{items, overlapped}
}

// overlap is the correlation of the transforms of white noise in two segments
// lag hops apart under the one window of a Welch design.
func (d *Design) overlap(lag int) float64 {
	return cmplx.Abs(tilt(d.tapers[0], d.tapers[0], lag*d.hop, 0))
}

// tilt is Σ_t v(t) w(t−shift) e^{−2πi t c}, c in cycles a sample.
func tilt(v, w []float64, shift int, c float64) complex128 {
	sum := complex(0, 0)
	step := cmplx.Rect(1, -2*math.Pi*c)
	phase := cmplx.Rect(1, -2*math.Pi*c*float64(shift))
	for t := shift; t < len(v); t++ {
		sum += complex(v[t]*w[t-shift], 0) * phase
		phase *= step
	}
	return sum
}

// NullCorrelation is the correlation, under independence of two white signals,
// of ln(1−γ̂²) at two frequencies d bins apart, for d = 0, 1, …, until it is
// negligible. stretch is the typical number of samples of a stretch.
//
// Ŝxy at the two frequencies is complex Gaussian with correlation
// c(d) ∝ Σ_{items} |Σ_t v_i(t) v_j(t) e^{−2πi t d/n}|²; the logarithms are
// nearly exponential variables, whose correlation is |c(d)/c(0)|². Derived here,
// verified by simulation.
func (d *Design) NullCorrelation(stretch int) []float64 {
	m := max(1, d.Segments(stretch))
	n := float64(d.plan.Len())
	reach := 4 * (d.halfWidthHz / d.Spacing()) // twice the full width of the main lobe
	if len(d.tapers) == 1 {
		reach = 8 * n / float64(d.length)
	}
	r := make([]float64, min(int(math.Ceil(reach))+1, d.bins))
	for lag := range r {
		sum := 0.0
		for i, v := range d.tapers {
			for _, w := range d.tapers[:i] {
				q := cmplx.Abs(tilt(v, w, 0, float64(lag)/n))
				sum += 2 * float64(m) * q * q
			}
			q := cmplx.Abs(tilt(v, v, 0, float64(lag)/n))
			sum += float64(m) * q * q
		}
		if len(d.tapers) == 1 {
			for hop := 1; hop*d.hop < d.length && hop < m; hop++ {
				q := cmplx.Abs(tilt(d.tapers[0], d.tapers[0], hop*d.hop, float64(lag)/n))
				sum += 2 * float64(m-hop) * q * q
			}
		}
		r[lag] = sum
	}
	for lag := len(r) - 1; lag >= 0; lag-- {
		c := r[lag] / r[0]
		r[lag] = c * c
	}
	return r
}
