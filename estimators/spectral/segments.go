package spectral

import (
	"fmt"
	"math"

	"codeassay/estimators"
)

// MinSegments is the number of segments below which spectra are held to be too
// few for an interval that can be trusted.
const MinSegments = 15

// edgeLossBits is the information lost at one edge of a flat band per Hz of
// half-bandwidth, at high signal-to-noise ratio: −∫₀¹ log2((1+u)/2) du =
// 1/ln 2 − 1 ≈ 0.4427 bits. Within W of the edge a taper of half-bandwidth W
// sees a linearly falling share of the stream's power.
const edgeLossBits = 1/math.Ln2 - 1

// SmearPerSD predicts the loss of a coherence rate by smearing at the band's
// upper edge, in standard errors of the estimate, at worst over all
// signal-to-noise ratios (the worst is the highest): edge loss W·(1/ln 2 − 1)
// over the sampling limit √(2 f_c/T)/ln 2.
func SmearPerSD(halfWidthHz, bandHz, durationS float64) float64 {
	return edgeLossBits * halfWidthHz * math.Ln2 / math.Sqrt(2*bandHz/durationS)
}

// ChooseLength picks the number of samples of a multitaper segment: the shortest
// power of two whose predicted smear is at most 0.2 standard errors, but never so
// long that fewer than MinSegments fit; where no power of two does both, the
// length that comes nearest. Where both cannot hold, the smear gives way and a
// warning says by how much. stretches are the lengths in samples of the
// uninterrupted stretches of the recording. It returns 0 where not even the
// shortest sensible segment fits.
func ChooseLength(stretches []int, dt, bandHz, nw float64) (int, []estimators.Warning) {
	total := 0
	for _, n := range stretches {
		total += n
	}
	durationS := float64(total) * dt
	smearOf := func(length int) float64 { return SmearPerSD(nw/(float64(length)*dt), bandHz, durationS) }
	best := 0
	for length := 16; length <= 1<<20; length *= 2 {
		if countSegments(stretches, length) < MinSegments && best != 0 {
			break
		}
		if countSegments(stretches, length) < 2 {
			break
		}
		best = length
		if smearOf(length) <= 0.2 {
			break
		}
	}
	if best != 0 && smearOf(best) > 0.2 {
		// Between this power of two and the next: what the smear asks for (it
		// falls as 1/length), as far as enough segments fit.
		wished := int(math.Ceil(float64(best) * smearOf(best) / 0.2))
		for low := best; low < wished; {
			mid := (low + wished + 1) / 2
			if countSegments(stretches, mid) >= MinSegments {
				low, best = mid, mid
			} else {
				wished = mid - 1
			}
		}
	}
	if best == 0 {
		return 0, nil
	}
	var warnings []estimators.Warning
	smear := smearOf(best)
	if smear > 0.2+1e-9 {
		severity := estimators.Note
		if smear > 1 {
			severity = estimators.Weak
		}
		// The wished length grows as √T and the segments that fit as T, so the
		// duration at which both hold is known.
		wanted := math.Pow(1.085*nw*MinSegments/math.Sqrt(bandHz), 2)
		warnings = append(warnings, estimators.Warning{
			Severity: severity, About: "segments",
			Text: fmt.Sprintf("segments of %.3g s are short for a band of %.3g Hz: at the band's edge up to %.2g standard errors of the information are smeared away (%d segments of the wished length would not fit)",
				float64(best)*dt, bandHz, smear, MinSegments),
			Remedy: fmt.Sprintf("record about %.0f s without interruption, or read the numbers as slightly low", math.Ceil(wanted)),
		})
	}
	return best, warnings
}

func countSegments(stretches []int, length int) int {
	n := 0
	for _, s := range stretches {
		n += s / length
	}
	return n
}
