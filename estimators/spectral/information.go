package spectral

import (
	"fmt"
	"math"

	"codeassay/estimators"
	"codeassay/estimators/resampling"
)

// Options say how Information estimates. The zero value of a field is its
// default; SampleInterval has none.
type Options struct {
	SampleInterval float64 // s
	LowHz          float64 // lower edge of the band
	HighHz         float64 // upper edge; 0: the stream's own band (OwnBand)
	SegmentS       float64 // 0: chosen (ChooseLength)
	HalfBandwidth  float64 // time-half-bandwidth product; 0: 2
	Confidence     float64 // 0: 0.95
}

// Information estimates, from two signals sampled together, the bits per second
// that code carries about stream: the multitaper coherence rate, corrected for
// its exact finite-sample bias, with a delete-a-segment jackknife interval and a
// test of independence. It is a lower bound where the stream is Gaussian.
//
// The signals must have equal lengths and be finite; they are not changed.
// Errors say what would suffice. Weak data come back as warnings in the Rate.
func Information(stream, code []float64, o Options) (estimators.Rate, error) {
	if len(stream) != len(code) {
		return estimators.Rate{}, fmt.Errorf("the stream has %d samples and the code %d: they must be sampled together", len(stream), len(code))
	}
	if !(o.SampleInterval > 0) {
		return estimators.Rate{}, fmt.Errorf("sample interval %g s: must be positive", o.SampleInterval)
	}
	x, err := centred("stream", stream)
	if err != nil {
		return estimators.Rate{}, err
	}
	y, err := centred("code", code)
	if err != nil {
		return estimators.Rate{}, err
	}
	if o.HalfBandwidth == 0 {
		o.HalfBandwidth = 2
	}
	if o.Confidence == 0 {
		o.Confidence = 0.95
	}
	if o.HighHz == 0 {
		if o.HighHz, err = OwnBand([][]float64{x}, o.SampleInterval); err != nil {
			return estimators.Rate{}, err
		}
	}
	if nyquist := 0.5 / o.SampleInterval; !(o.HighHz > o.LowHz) || o.HighHz > nyquist*(1+1e-9) {
		return estimators.Rate{}, fmt.Errorf("band %g to %g Hz: must rise, and end at or below %g Hz", o.LowHz, o.HighHz, nyquist)
	}
	var warnings []estimators.Warning
	length := int(math.Round(o.SegmentS / o.SampleInterval))
	if o.SegmentS == 0 {
		length, warnings = ChooseLength([]int{len(x)}, o.SampleInterval, o.HighHz, o.HalfBandwidth)
	}
	if length < 16 || len(x)/length < 2 {
		return estimators.Rate{}, fmt.Errorf("%d samples hold fewer than 2 segments of at least 16", len(x))
	}
	design, err := NewMultitaper(length, o.HalfBandwidth, 0, o.SampleInterval, o.HighHz)
	if err != nil {
		return estimators.Rate{}, err
	}
	return rate(design, x, y, o, warnings), nil
}

// rate is the estimate with each segment left out in turn.
func rate(d *Design, x, y []float64, o Options, warnings []estimators.Warning) estimators.Rate {
	scratch := d.NewScratch()
	segments := len(x) / d.length
	type spectra struct {
		sxx, syy []float64
		sxy      []complex128
	}
	fresh := func() spectra {
		return spectra{make([]float64, d.bins), make([]float64, d.bins), make([]complex128, d.bins)}
	}
	all := fresh()
	parts := make([]spectra, segments)
	for i := range parts {
		zx := d.Transforms(nil, x[i*d.length:(i+1)*d.length], 0, scratch)
		zy := d.Transforms(nil, y[i*d.length:(i+1)*d.length], 0, scratch)
		parts[i] = fresh()
		d.AddAuto(parts[i].sxx, zx)
		d.AddAuto(parts[i].syy, zy)
		d.AddCross(parts[i].sxy, zy, zx)
		for k := range all.sxx {
			all.sxx[k] += parts[i].sxx[k]
			all.syy[k] += parts[i].syy[k]
			all.sxy[k] += parts[i].sxy[k]
		}
	}
	peak := 0.0
	for _, p := range all.sxx {
		peak = math.Max(peak, p)
	}
	band := d.Band(o.LowHz, o.HighHz, func(k int) bool { return all.sxx[k] >= 1e-6*peak })
	n := float64(segments * len(d.tapers))
	nats := band.LogCoherence(all.sxx, all.syy, all.sxy)
	r := estimators.Rate{BitsPerS: (nats + band.Bias(n, 1, 1)) / math.Ln2, Confidence: o.Confidence, DoF: float64(segments - 1), Warnings: warnings}

	nLess := n - float64(len(d.tapers))
	deleted := make([]float64, segments)
	rest := fresh()
	for i, p := range parts {
		for k := range all.sxx {
			rest.sxx[k] = all.sxx[k] - p.sxx[k]
			rest.syy[k] = all.syy[k] - p.syy[k]
			rest.sxy[k] = all.sxy[k] - p.sxy[k]
		}
		deleted[i] = (band.LogCoherence(rest.sxx, rest.syy, rest.sxy) + band.Bias(nLess, 1, 1)) / math.Ln2
	}
	variance, _ := resampling.Jackknife(r.BitsPerS, deleted, nil)
	r.Low, r.High = resampling.TInterval(r.BitsPerS, variance, r.DoF, o.Confidence)
	mean, nullVar := band.Null(n, 1, 1, d.NullCorrelation(d.length))
	r.PValue = resampling.GammaTail(nats, mean, nullVar)
	return r
}

// centred is a copy of x with its mean removed.
func centred(name string, x []float64) ([]float64, error) {
	out := make([]float64, len(x))
	mean := 0.0
	for i, v := range x {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("%s: sample %d is %g: must be finite", name, i, v)
		}
		mean += v / float64(len(x))
	}
	varies := false
	for i, v := range x {
		out[i] = v - mean
		varies = varies || v != x[0]
	}
	if !varies {
		return nil, fmt.Errorf("%s is constant: it can neither inform nor be informed about", name)
	}
	return out, nil
}
