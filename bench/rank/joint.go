package rank

import (
	"math"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/estimators/resampling"
)

func (a *assembler) joint(size, row int, truth *Truth) bench.JointRow {
	l := &a.out.Layout
	key, info := l.Rows[row], l.Info[row]
	band := l.Bands[key.Band]
	e := a.estimate(size, row)
	v := a.variance(e)
	pair := l.Pairs[key.Pair]
	r := bench.JointRow{
		Streams: append([]string{}, l.Streams...), Codes: []string{l.Codes[pair[0]].Name, l.Codes[pair[1]].Name}, Cells: l.Sizes[size],
		BandLowHz: bench.Number(band.Low), BandHz: bench.Number(band.High), UsedHz: bench.Number(info.UsedHz), InputBandwidthHz: bench.None,
		Estimator: l.Estimators[key.Estimator].Name, BitsPerS: bench.Number(e.mean), Confidence: bench.Number(l.Confidence),
		DrawSD: bench.Number(e.drawSD), PValue: bench.Number(a.pValue(size, row, e)),
		SpikeRateBitsPerS: bench.None, GainOverSpikeRate: bench.None, GainLow: bench.None, GainHigh: bench.None,
		SplitBitsPerS: bench.None, GainOverSplit: bench.None, GainOverSplitLow: bench.None, GainOverSplitHigh: bench.None,
		TruthBitsPerS: bench.None, Warnings: []estimators.Warning{},
	}
	low, high := resampling.TInterval(e.mean, v, a.blockDoF(), l.Confidence)
	r.CILow, r.CIHigh = bench.Number(low), bench.Number(high)
	r.Detected = float64(r.PValue) < 1-l.Confidence
	spikes, split := a.partner(key, bench.JointSpikes), a.partner(key, bench.Split)
	if spikes >= 0 {
		r.SpikeRateBitsPerS = bench.Number(a.estimate(size, spikes).mean)
		r.GainOverSpikeRate, r.GainLow, r.GainHigh = a.gain(size, row, spikes)
	}
	if split >= 0 {
		r.SplitBitsPerS = bench.Number(a.estimate(size, split).mean)
		r.GainOverSplit, r.GainOverSplitLow, r.GainOverSplitHigh = a.gain(size, row, split)
	}
	if !r.GainOverSpikeRate.Known() && r.Detected {
		r.Warnings = append(r.Warnings, estimators.Warning{Severity: estimators.Note, About: "gain",
			Text: "no gain is given: what it is held against is not clearly above zero", Remedy: "more cells or a longer recording"})
	}
	if truth != nil {
		r.TruthBitsPerS = truth.joint(l, key, l.Sizes[size])
	}
	return r
}

// partner is the row of another kind in the same band by the same estimator, −1
// where there is none.
func (a *assembler) partner(key bench.RowKey, kind bench.RowKind) int {
	for row, k := range a.out.Layout.Rows {
		if k.Kind == kind && k.Estimator == key.Estimator && k.Band == key.Band {
			return row
		}
	}
	return -1
}

// gain is the ratio of two rows with an interval from the delete-a-block
// jackknife of its logarithm, which keeps it positive. It is None where either
// row is not positive with any block left out.
func (a *assembler) gain(size, row, over int) (gain, low, high bench.Number) {
	top, bottom := a.estimate(size, row), a.estimate(size, over)
	e := estimate{deleted: make([]float64, len(top.deleted))}
	if top.mean <= 0 || bottom.mean <= 0 {
		return bench.None, bench.None, bench.None
	}
	e.mean = math.Log(top.mean / bottom.mean)
	for j := range e.deleted {
		if top.deleted[j] <= 0 || bottom.deleted[j] <= 0 {
			return bench.None, bench.None, bench.None
		}
		e.deleted[j] = math.Log(top.deleted[j] / bottom.deleted[j])
	}
	lo, hi := resampling.TInterval(e.mean, a.variance(e), a.blockDoF(), a.out.Layout.Confidence)
	return bench.Number(math.Exp(e.mean)), bench.Number(math.Exp(lo)), bench.Number(math.Exp(hi))
}
