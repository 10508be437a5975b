package inspect

import (
	"context"
	"math"

	"codeassay/bench"
	"codeassay/estimators/spectral"
	"codeassay/estimators/stationarity"
	"codeassay/scenarios"
)

// joined are the samples of a stream, trial after trial; one trial only where
// all repeat the same input.
func joined(src bench.Source, stream int) (all []float64, stretches [][]float64) {
	for t := range src.Trials() {
		x := src.StreamSamples(stream, t)
		stretches = append(stretches, x)
		if src.Meaning() == scenarios.FrozenRepeats {
			return x, stretches
		}
	}
	if len(stretches) == 1 {
		return stretches[0], stretches
	}
	for _, x := range stretches {
		all = append(all, x...)
	}
	return all, stretches
}

func (doc *Document) describeStreams(ctx context.Context, src bench.Source) error {
	doc.Streams, doc.Correlations, doc.Recording.Streams = []Stream{}, []StreamCorrelation{}, []string{}
	var all [][]float64
	for s, stream := range src.Streams() {
		if err := ctx.Err(); err != nil {
			return err
		}
		x, stretches := joined(src, s)
		all = append(all, x)
		d, err := describeStream(stream, x, stretches, src.Dt())
		if err != nil {
			return err
		}
		doc.Streams = append(doc.Streams, d)
		doc.Recording.Streams = append(doc.Recording.Streams, stream.Name)
	}
	for i := range all {
		for j := range all[:i] {
			if err := ctx.Err(); err != nil {
				return err
			}
			r, p := stationarity.Correlation(all[j], all[i])
			doc.Correlations = append(doc.Correlations, StreamCorrelation{
				Streams: [2]string{doc.Streams[j].Stream, doc.Streams[i].Stream}, Correlation: bench.Number(r), PValue: bench.Number(p)})
		}
	}
	return nil
}

func describeStream(stream scenarios.Stream, x []float64, stretches [][]float64, dt float64) (Stream, error) {
	shape := stationarity.Gaussianity(x)
	d := Stream{Stream: stream.Name, Measure: stream.Measure, Samples: len(x), DtMS: bench.Number(dt * 1e3),
		Mean: bench.Number(shape.Mean), SD: bench.Number(shape.SD), Min: bench.Number(x[0]), Max: bench.Number(x[0]),
		Skewness: bench.Number(shape.Skewness), ExcessKurtosis: bench.Number(shape.ExcessKurtosis),
		GaussianP: bench.Number(shape.PValue), VisiblyOther: shape.Visible(),
		BandHz: bench.Number(stream.BandHz), BandKnown: stream.BandHz > 0, Independent: bench.Number(stationarity.Independent(x)),
		OverTime: steadiness(stationarity.StreamDrift(x), shape.SD), Spectrum: []Power{}}
	for _, v := range x {
		d.Min, d.Max = min(d.Min, bench.Number(v)), max(d.Max, bench.Number(v))
	}
	centred := make([][]float64, len(stretches))
	for i, s := range stretches {
		centred[i] = make([]float64, len(s))
		for k, v := range s {
			centred[i][k] = v - shape.Mean
		}
	}
	if !d.BandKnown {
		edge, err := spectral.OwnBand(centred, dt)
		if err != nil {
			return d, err
		}
		d.BandHz = bench.Number(edge)
	}
	if d.BandHz > 0 {
		d.Spectrum = spectrum(centred, dt, float64(d.BandHz))
	} else {
		d.BandHz = bench.None
	}
	return d, nil
}

// powerBins is the number of bands that a spectrum is shown in, from zero to
// twice the stream's band.
const powerBins = 24

// spectrum is a Welch estimate with segments that resolve the bands, or as long
// as the recording allows.
func spectrum(stretches [][]float64, dt, bandHz float64) []Power {
	top := math.Min(2*bandHz, 0.5/dt)
	longest := 0
	for _, x := range stretches {
		longest = max(longest, len(x))
	}
	length := 16
	for length*2 <= longest/4 && float64(length)*dt*top < 4*powerBins {
		length *= 2
	}
	design, err := spectral.NewWelch(min(length, longest), 0.5, "hann", dt, top)
	if err != nil {
		return []Power{}
	}
	density := make([]float64, design.Bins())
	scratch := design.NewScratch()
	for _, x := range stretches {
		design.AddAuto(density, design.Transforms(nil, x, 0, scratch))
	}
	total, peak := 0.0, 0.0
	var out []Power
	var mean []float64
	for k := range powerBins {
		low, high := top*float64(k)/powerBins, top*float64(k+1)/powerBins
		band := design.Band(low, high, nil)
		power := 0.0
		for i, w := range band.Weight {
			power += w * density[band.First+i]
		}
		total += power
		out = append(out, Power{LowHz: bench.Number(low), HighHz: bench.Number(high), Share: bench.Number(power)})
		mean = append(mean, power/(high-low))
		peak = math.Max(peak, power/(high-low))
	}
	for k := range out {
		out[k].Share /= bench.Number(total)
		out[k].DB = bench.Number(10 * math.Log10(mean[k]/peak))
	}
	return out
}

// stretches is the number of stretches that rates are counted in, so that each
// is long against the slowest stream that drives them.
func (doc *Document) stretches(src bench.Source) int {
	const most, fewest = 80, 20
	longest := 1.0 / most
	for s := range src.Streams() {
		x, _ := joined(src, s)
		per := stationarity.Stretch(x)
		if per == 0 {
			return fewest
		}
		longest = math.Max(longest, float64(per)/float64(len(x)))
	}
	return max(fewest, int(1/longest))
}
