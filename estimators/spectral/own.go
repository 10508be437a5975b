package spectral

import "math"

// OwnBand estimates the upper edge, in Hz, of the band that a stream fills: the
// highest frequency at which its smoothed spectrum is within 30 dB of its peak.
// stretches are uninterrupted pieces, with the mean of the whole removed. It
// returns 0 for a stream without power. The 30 dB are ours: a thousandth of the
// peak power density carries next to no information at the signal-to-noise
// ratios of spike trains, and smearing does not reach it.
func OwnBand(stretches [][]float64, dt float64) (float64, error) {
	longest, total := 0, 0
	for _, x := range stretches {
		longest = max(longest, len(x))
		total += len(x)
	}
	// Forty segments, whatever the sample interval: the edge of a band must not
	// depend on how finely a stream was sampled.
	length := min(max(total/40, 16), 1<<16, longest)
	design, err := NewWelch(length, 0.5, "hann", dt, 0.5/dt)
	if err != nil {
		return 0, err
	}
	scratch := design.NewScratch()
	power := make([]float64, design.Bins())
	for _, x := range stretches {
		design.AddAuto(power, design.Transforms(nil, x, 0, scratch))
	}
	peak := 0.0
	for _, p := range power {
		peak = math.Max(peak, p)
	}
	if peak == 0 {
		return 0, nil
	}
	edge := 0
	for k, p := range power {
		if p >= 1e-3*peak {
			edge = k
		}
	}
	// Hann's main lobe reaches two bins beyond a sharp edge.
	return math.Max(float64(edge-1), 1) * design.Spacing(), nil
}
