package sweep

import "math"

// onBins brings samples of width dt onto bins of width bin seconds: the mean of
// the samples in a bin where they are finer, a straight line between their
// centres where they are coarser. Either is a linear filter, and coherence does
// not depend on those.
func onBins(samples []float64, dt, bin float64, bins int) []float64 {
	out := make([]float64, bins)
	if math.Abs(dt-bin) < 1e-9*bin {
		copy(out, samples[:min(bins, len(samples))])
		return out
	}
	if dt < bin {
		for i := range out {
			lo := int(math.Round(float64(i) * bin / dt))
			hi := min(int(math.Round(float64(i+1)*bin/dt)), len(samples))
			lo = min(lo, hi-1)
			sum := 0.0
			for _, v := range samples[lo:hi] {
				sum += v
			}
			out[i] = sum / float64(hi-lo)
		}
		return out
	}
	for i := range out {
		at := (float64(i)+0.5)*bin/dt - 0.5
		lo := min(max(int(math.Floor(at)), 0), len(samples)-1)
		hi := min(lo+1, len(samples)-1)
		u := math.Min(math.Max(at-float64(lo), 0), 1)
		out[i] = samples[lo] + u*(samples[hi]-samples[lo])
	}
	return out
}

// removeMean subtracts the mean over all trials, once over the recording.
func removeMean(trials [][]float64) {
	sum, n := 0.0, 0
	for _, x := range trials {
		for _, v := range x {
			sum += v
		}
		n += len(x)
	}
	mean := sum / float64(max(n, 1))
	for _, x := range trials {
		for i := range x {
			x[i] -= mean
		}
	}
}

// shifted fills dst with x from first−lag on: the stream as it stood lag bins
// before the code. Outside the trial the stream is at its mean, 0.
func shifted(dst, x []float64, first, lag int) []float64 {
	from := first - lag
	if from >= 0 && from+len(dst) <= len(x) {
		return x[from : from+len(dst)]
	}
	for i := range dst {
		dst[i] = 0
		if t := from + i; t >= 0 && t < len(x) {
			dst[i] = x[t]
		}
	}
	return dst
}
