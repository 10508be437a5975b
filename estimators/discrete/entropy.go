package discrete

import "math"

// Method corrects an entropy, and so an information, for the bias of limited
// counts. The zero value is the default, Jackknife.
type Method uint8

const (
	// Jackknife leaves out one sample at a time: N Ĥ − ((N−1)/N) Σ nᵢ Ĥ₋ᵢ (Zahl
	// 1977, Ecology 58:907–913), in time proportional to the cells, not to the
	// samples. It removes the bias of order 1/N.
	Jackknife Method = iota
	// PlugIn is −Σ p̂ log2 p̂ of the observed frequencies, too low by about
	// (K−1)/(2N ln 2) bits for K bins.
	PlugIn
	// MillerMadow adds (K_obs−1)/(2N ln 2) bits to PlugIn for the K_obs bins seen
	// (Miller 1955, in Quastler (ed.), Information Theory in Psychology, 95–100).
	MillerMadow
	// PanzeriTreves corrects PlugIn likewise, for the number of bins that
	// RelevantBins infers (Panzeri and Treves 1996, Network 7:87–107).
	PanzeriTreves
)

// Methods lists the corrections, the default first.
func Methods() []Method { return []Method{Jackknife, PlugIn, MillerMadow, PanzeriTreves} }

func (m Method) String() string {
	switch m {
	case Jackknife:
		return "jackknife"
	case PlugIn:
		return "plug-in"
	case MillerMadow:
		return "Miller–Madow"
	case PanzeriTreves:
		return "Panzeri–Treves"
	}
	panic("discrete: unknown method")
}

// Entropy is the entropy in bits of the distribution behind counts, and the
// estimate's sampling variance in bits² for independent samples.
//
// Counts include the zeros of bins that could be seen but were not. The variance
// is the jackknife's own for Jackknife and Var(log2 p̂)/N otherwise; it is zero,
// to first order, where all counts are equal. No samples give 0, 0. It panics on
// a negative count.
func Entropy(counts []int64, m Method) (bits, variance float64) {
	total, observed := int64(0), 0
	for _, n := range counts {
		if n < 0 {
			panic("discrete: a count is negative")
		}
		total += n
		if n > 0 {
			observed++
		}
	}
	if total == 0 {
		return 0, 0
	}
	mean := 0.0
	for _, n := range counts {
		if n > 0 {
			mean += float64(n) * m.kernel(n)
		}
	}
	mean /= float64(total)
	for _, n := range counts {
		if n > 0 {
			d := m.kernel(n) - mean
			variance += float64(n) * d * d
		}
	}
	nats := m.kernel(total) - mean
	switch m {
	case MillerMadow:
		nats += float64(observed-1) / (2 * float64(total))
	case PanzeriTreves:
		nats += float64(RelevantBins(counts, len(counts))-1) / (2 * float64(total))
	}
	return nats / math.Ln2, m.varianceOfMean(variance, total) / (math.Ln2 * math.Ln2)
}

// kernel is the g of Ĥ = g(N) − (1/N) Σ nᵢ g(nᵢ), in nats: ln n for the plug-in
// entropy, and n ln n − (n−1) ln(n−1) for the jackknife. The second follows by
// writing Ĥ = ln N − F/N with F = Σ f(nᵢ), f(n) = n ln n: without a sample of
// bin i, F loses f(nᵢ) − f(nᵢ−1) = g(nᵢ), and in the jackknife's sum F cancels.
func (m Method) kernel(n int64) float64 {
	if n <= 1 {
		return 0
	}
	x := float64(n)
	g := math.Log(x)
	if m == Jackknife {
		g -= (x - 1) * math.Log1p(-1/x)
	}
	return g
}

// varianceOfMean is the variance of the mean of g over the samples, whose squared
// deviations add up to sum: what varies in an estimate of kernel's form. For
// Jackknife it is ((N−1)/N) Σ nᵢ (Ĥ₋ᵢ − mean)².
func (m Method) varianceOfMean(sum float64, total int64) float64 {
	n := float64(total)
	if m != Jackknife {
		return sum / (n * n)
	}
	if total < 2 {
		return 0
	}
	return sum / (n * (n - 1))
}
