package rank

import (
	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/estimators/resampling"
)

// chance are the rows of the burst-free surrogate of the full ensemble: what
// chance bursts alone would carry. They are not ranked.
func (a *assembler) chance() []bench.Row {
	rows := []bench.Row{}
	if a.out.Chance == nil {
		return rows
	}
	l := &a.out.Layout
	for row, key := range l.Rows {
		if key.Kind != bench.Single || !l.Estimators[key.Estimator].Spectral {
			continue
		}
		e := estimate{mean: a.out.Chance.Full[row], draws: 1}
		for j := range l.BlockWeights {
			e.deleted = append(e.deleted, a.out.Chance.Deleted[j][row])
		}
		low, high := resampling.TInterval(e.mean, a.variance(e), a.blockDoF(), l.Confidence)
		band, info := l.Bands[key.Band], l.Info[row]
		p := resampling.GammaTail(e.mean*ln2+info.NullMean, info.NullMean, info.NullVar)
		r := bench.Row{Stream: l.Streams[key.Stream], Given: []string{}, Code: l.Codes[key.Code].Name, Cells: l.Cells,
			BandLowHz: bench.Number(band.Low), BandHz: bench.Number(band.High), UsedHz: bench.Number(info.UsedHz), InputBandwidthHz: bench.None,
			Estimator: l.Estimators[key.Estimator].Name, Quantity: l.Estimators[key.Estimator].Quantity,
			BitsPerS: bench.Number(e.mean), CILow: bench.Number(low), CIHigh: bench.Number(high), Confidence: bench.Number(l.Confidence),
			CICellsLow: bench.None, CICellsHigh: bench.None, Draws: 1, PValue: bench.Number(p), Detected: p < 1-l.Confidence,
			BitsPerSpike: bench.None, BitsPerEvent: bench.None, DelayMS: bench.Number(a.out.DelaysMS[key.Stream]),
			Segments: info.Segments, NEff: bench.Number(info.NEff), TruthBitsPerS: bench.None, Warnings: []estimators.Warning{}}
		if r.Detected && a.out.ChanceSpikesPerS > 0 {
			r.BitsPerSpike = bench.Number(e.mean / a.out.ChanceSpikesPerS)
			r.BitsPerEvent = r.BitsPerSpike
		}
		rows = append(rows, r)
	}
	return rows
}
