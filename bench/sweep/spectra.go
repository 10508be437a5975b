package sweep

import (
	"math"

	"codeassay/bench"
	"codeassay/estimators/spectral"
)

// spectra are the coherences of the largest ensemble.
func (g *engine) spectra(snap *snapshot) []bench.Spectrum {
	var out []bench.Spectrum
	for e, m := range g.methods {
		if !m.info.Spectral {
			continue
		}
		bins := m.design.Bins()
		streams := g.finish[0].streams[e][len(g.blocks)]
		all := g.newCodeSums(e)
		for _, s := range snap.sums[e] {
			all.add(s)
		}
		n := all.tally.NEff()
		for s, name := range g.layout.Streams {
			for c := range g.codes.shown {
				sp := bench.Spectrum{Stream: name, Code: g.codes.codes[c].Name, Cells: snap.of.cells, InputBandwidthHz: bench.None,
					Estimator: m.info.Name, Threshold: bench.Number(spectral.NullThreshold(n, 0, significance(g.layout.Confidence)))}
				sxx, syy, sxy := part(streams.auto, s, bins), part(all.auto, c, bins), part(all.cross, g.codeCross(c, s), bins)
				for k := range bins {
					if !g.masks[e][s][k] {
						continue
					}
					sp.FreqHz = append(sp.FreqHz, bench.Number(roundTo(float64(k)*m.design.Spacing(), 9)))
					msc, lo, hi := bench.None, bench.None, bench.None
					if d := sxx[k] * syy[k]; d > 0 {
						raw := power(sxy[k]) / d
						l, h := spectral.CoherenceInterval(raw, n, normalQuantile(g.layout.Confidence))
						msc, lo, hi = bench.Number(spectral.Debias(raw, n, 0)), bench.Number(l), bench.Number(h)
					}
					sp.Coherence = append(sp.Coherence, msc)
					sp.CILow = append(sp.CILow, lo)
					sp.CIHigh = append(sp.CIHigh, hi)
				}
				out = append(out, sp)
			}
		}
	}
	return out
}

func normalQuantile(confidence float64) float64 {
	return math.Sqrt2 * math.Erfinv(confidence)
}
