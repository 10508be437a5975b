package spectral

import "math"

// Band is a set of frequency cells: bin First+i owns Weight[i] Hz, the part of
// [f − Δf/2, f + Δf/2] that lies in the band. A weight of 0 leaves a cell out.
type Band struct {
	First  int
	Weight []float64
}

// Band cuts [lowHz, highHz] into the design's frequency cells, zero frequency
// included. keep, where not nil, says which bins may be used.
func (d *Design) Band(lowHz, highHz float64, keep func(bin int) bool) Band {
	df := d.Spacing()
	first := max(0, int(math.Floor(lowHz/df+0.5)))
	b := Band{First: first}
	for k := first; k < d.bins; k++ {
		low := math.Max((float64(k)-0.5)*df, lowHz)
		high := math.Min((float64(k)+0.5)*df, highHz)
		if low >= highHz {
			break
		}
		w := math.Max(0, high-math.Max(low, 0))
		if keep != nil && !keep(k) {
			w = 0
		}
		b.Weight = append(b.Weight, w)
	}
	return b
}

// UsedHz is what the band sums over.
func (b Band) UsedHz() float64 {
	sum := 0.0
	for _, w := range b.Weight {
		sum += w
	}
	return sum
}

// Bias is the bias, in nats·Hz, of Σ w ln[det ratio] over the band for p inputs
// and q outputs (negative), each cell with its exact bias.
func (b Band) Bias(n float64, p, q int) float64 {
	complexBias := LogDetBias(n, p, q)
	sum := 0.0
	for i, w := range b.Weight {
		if b.First+i == 0 {
			sum += w * LogDetBiasReal(n, p, q)
			continue
		}
		sum += w * complexBias
	}
	return sum
}

// Null returns the mean and the variance, in nats·Hz, of −Σ w ln[det ratio]
// under independence of p inputs and q outputs, with neighbouring cells
// correlated as in correlation (from Design.NullCorrelation).
func (b Band) Null(n float64, p, q int, correlation []float64) (mean, variance float64) {
	mean = -b.Bias(n, p, q)
	cell := LogDetNullVar(n, p, q)
	for i, w := range b.Weight {
		sum := w * correlation[0]
		for lag := 1; lag < len(correlation) && i+lag < len(b.Weight); lag++ {
			sum += 2 * b.Weight[i+lag] * correlation[lag]
		}
		variance += w * sum * cell
	}
	return mean, variance
}
