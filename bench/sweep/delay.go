package sweep

import (
	"fmt"
	"math"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/estimators/resampling"
	"codeassay/estimators/spectral"
)

// maxDelayS bounds the delays that are looked for.
const maxDelayS = 0.25

// findDelays estimates by how much the codes lag behind each stream and sets the
// plan's lags; it reports whether any is not zero. One delay a stream serves all
// codes: with segments of seconds the few milliseconds between codes cost less
// than 0.1 % of the coherence.
func (g *engine) findDelays(snap *snapshot) bool {
	e := -1
	for i, m := range g.methods {
		if m.info.Spectral {
			e = i
			break
		}
	}
	if e < 0 {
		return false
	}
	design := g.methods[e].design
	bins := design.Bins()
	streams := g.finish[0].streams[e][len(g.blocks)]
	all := g.newCodeSums(e)
	for _, s := range snap.sums[e] {
		all.add(s)
	}
	any := false
	for s := range g.streams {
		best, bestRow := 0.0, -1
		for row, key := range g.layout.Rows {
			if key.Estimator != e || key.Kind != bench.Single || key.Stream != s {
				continue
			}
			nats := g.rowCells[row].all.LogCoherence(part(streams.auto, s, bins), part(all.auto, key.Code, bins), part(all.cross, g.codeCross(key.Code, s), bins))
			info := g.layout.Info[row]
			if nats > best && resampling.GammaTail(nats, info.NullMean, info.NullVar) < 1e-4 {
				best, bestRow = nats, row
			}
		}
		if bestRow < 0 {
			continue
		}
		c := g.layout.Rows[bestRow].Code
		delay, se := phaseDelay(g.rowCells[bestRow].all, design.Spacing(),
			part(streams.auto, s, bins), part(all.auto, c, bins), part(all.cross, g.codeCross(c, s), bins),
			all.tally.NEff(), math.Min(maxDelayS, float64(design.Length())*g.bin/4), g.bin)
		lag := int(math.Round(delay / g.bin))
		if math.Abs(delay) < 3*se || lag == 0 {
			continue
		}
		g.lags[s] = lag
		any = true
		if share := math.Abs(delay) / (float64(g.shortest()) * g.bin); share > 0.05 {
			g.warnings = append(g.warnings, estimators.Warning{Severity: estimators.Note, About: g.layout.Streams[s],
				Text:   fmt.Sprintf("the codes follow this stream %.3g ms late, %.2g of a segment; the delay was removed, and without that up to %.2g of the coherence would be lost", delay*1e3, share, 1-(1-share)*(1-share)),
				Remedy: "longer segments, if the delay is not the same for all codes"})
		}
	}
	return any
}

// shortest is the shortest segment of any spectral method, in bins.
func (p *plan) shortest() int {
	n := math.MaxInt
	for _, m := range p.methods {
		if m.info.Spectral {
			n = min(n, m.design.Length())
		}
	}
	return n
}

// phaseDelay is the delay of y behind x, in s, that best straightens the phase of
// their cross-spectrum sxy = ⟨Y X*⟩: it maximises |Σ γ²/(1−γ²) cos(φ + 2πfτ)|,
// the likelihood for Gaussian signals (Carter 1980, IEEE Trans. ASSP 28:97–99,
// from memory), on a grid of step s up to limit. The absolute value lets a code
// that falls when the stream rises be aligned as well. se is the standard error
// of the delay.
func phaseDelay(band spectral.Band, df float64, sxx, syy []float64, sxy []complex128, n, limit, step float64) (delay, se float64) {
	var weight, phase, freq []float64
	information := 0.0
	for i, w := range band.Weight {
		k := band.First + i
		d := sxx[k] * syy[k]
		if w == 0 || d == 0 {
			continue
		}
		msc := math.Min(power(sxy[k])/d, 1-1e-9)
		snr := w / df * msc / (1 - msc)
		f := float64(k) * df
		weight = append(weight, snr)
		freq = append(freq, f)
		phase = append(phase, math.Atan2(imag(sxy[k]), real(sxy[k])))
		information += 2 * n * snr * 4 * math.Pi * math.Pi * f * f
	}
	best := -1.0
	for k := -int(limit / step); k <= int(limit/step); k++ {
		tau := float64(k) * step
		sum := 0.0
		for i, f := range freq {
			sum += weight[i] * math.Cos(phase[i]+2*math.Pi*f*tau)
		}
		if sum = math.Abs(sum); sum > best {
			best, delay = sum, tau
		}
	}
	// Neighbouring bins of a tapered transform are not independent: four of
	// them count as one, which is on the safe side.
	return delay, 2 / math.Sqrt(information)
}
