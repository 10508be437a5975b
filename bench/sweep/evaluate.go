package sweep

import (
	"math"

	"codeassay/bench"
	"codeassay/estimators/spectral"
)

// ensemble is what an estimate must know of the ensemble besides its spectra.
type ensemble struct {
	cells      int
	spikesPerS float64 // of the whole ensemble
	eventsPerS float64
}

// evaluator turns sums into rates, row by row. Each worker owns one.
type evaluator struct {
	p        *plan
	matrix   *spectral.Matrix
	sxx, syy []float64
	sxy      []complex128
}

func newEvaluator(p *plan) *evaluator {
	bins := 0
	for _, m := range p.methods {
		if m.info.Spectral {
			bins = max(bins, m.design.Bins())
		}
	}
	return &evaluator{p: p, matrix: spectral.NewMatrix(len(p.streams) + 2),
		sxx: make([]float64, bins), syy: make([]float64, bins), sxy: make([]complex128, bins)}
}

// rates fills, of dst by row, the rows of method e, in bits/s, corrected for bias.
func (v *evaluator) rates(dst []float64, e int, streams, codes sums, of ensemble) {
	for row, key := range v.p.layout.Rows {
		if key.Estimator != e {
			continue
		}
		dst[row] = v.rate(row, key, streams, codes, of)
	}
}

func (v *evaluator) rate(row int, key bench.RowKey, streams, codes sums, of ensemble) float64 {
	p := v.p
	bins := p.methods[key.Estimator].design.Bins()
	cells := p.rowCells[row]
	band := cells.all
	n := codes.tally.NEff()
	switch key.Kind {
	case bench.Single:
		if !active(part(codes.auto, key.Code, bins)) {
			return 0
		}
		sxx, syy := part(streams.auto, key.Stream, bins), part(codes.auto, key.Code, bins)
		sxy := part(codes.cross, p.codeCross(key.Code, key.Stream), bins)
		nats := band.LogCoherence(sxx, syy, sxy) - cells.bias(n)
		if p.frozen {
			nats += frozenBias(band, sxx, syy, sxy, n, n/float64(len(p.trialBins())))
		}
		return nats / math.Ln2
	case bench.Partial:
		if !active(part(codes.auto, key.Code, bins)) {
			return 0
		}
		return (v.partial(band, key, streams, codes, bins) - cells.bias(n)) / math.Ln2
	case bench.Joint:
		pair := p.codes.pairs[key.Pair]
		return (v.joint(band, key.Estimator, streams, codes, pair[:], p.pairCross(key.Pair)) - cells.bias(n)) / math.Ln2
	case bench.JointSpikes:
		return (v.joint(band, key.Estimator, streams, codes, []int{p.codes.spike}, -1) - cells.bias(n)) / math.Ln2
	case bench.Split:
		return v.split(band, streams, codes, of, n, bins) / math.Ln2
	}
	panic("sweep: not a spectral row")
}

// active reports whether a code varies at all; one that does not carries nothing.
func active(auto []float64) bool {
	for _, a := range auto {
		if a > 0 {
			return true
		}
	}
	return false
}

// frozenBias is the further bias, in nats/s, of Σ w ln(1−γ̂²) when m distinct
// estimates are repeated to n: ½γ⁴(1/m − 1/n) a cell, to first order (derived
// here, verified by simulation). It is added to the negative of that sum.
func frozenBias(b spectral.Band, sxx, syy []float64, sxy []complex128, n, m float64) float64 {
	sum := 0.0
	for i, w := range b.Weight {
		k := b.First + i
		d := sxx[k] * syy[k]
		if w == 0 || d == 0 {
			continue
		}
		c := sxy[k]
		msc := math.Max(0, spectral.Debias((real(c)*real(c)+imag(c)*imag(c))/d, n, 0))
		sum += w * 0.5 * msc * msc * (1/m - 1/n)
	}
	return sum
}

// partial is −Σ w ln(1−γ²) of a code and a stream, given all other streams.
func (v *evaluator) partial(band spectral.Band, key bench.RowKey, streams, codes sums, bins int) float64 {
	p := v.p
	m := len(p.streams)
	if m == 2 {
		z := 1 - key.Stream
		szz := part(streams.auto, z, bins)
		sxx, syy := part(streams.auto, key.Stream, bins), part(codes.auto, key.Code, bins)
		zx := part(streams.cross, 0, bins) // S of stream 1 with stream 0
		yx := part(codes.cross, p.codeCross(key.Code, key.Stream), bins)
		yz := part(codes.cross, p.codeCross(key.Code, z), bins)
		for i := range band.Weight {
			k := band.First + i
			v.sxx[k], v.syy[k], v.sxy[k] = sxx[k], syy[k], yx[k]
			if !p.masks[key.Estimator][z][k] || szz[k] == 0 {
				continue
			}
			cross := zx[k] // z with x
			if key.Stream == 1 {
				cross = complex(real(cross), -imag(cross))
			}
			v.sxx[k] -= power(cross) / szz[k]
			v.syy[k] = math.Max(v.syy[k]-power(yz[k])/szz[k], 1e-15*v.syy[k])
			v.sxy[k] -= yz[k] * cross / complex(szz[k], 0)
		}
		return band.LogCoherence(v.sxx, v.syy, v.sxy)
	}
	sum := 0.0
	for i, w := range band.Weight {
		if w == 0 {
			continue
		}
		k := band.First + i
		order := []int{key.Stream}
		for z := range m {
			if z != key.Stream && p.masks[key.Estimator][z][k] {
				order = append(order, z)
			}
		}
		v.fill(k, bins, order, []int{key.Code}, -1, streams, codes)
		sum += w * v.matrix.Partial()
	}
	return sum
}

func power(c complex128) float64 { return real(c)*real(c) + imag(c)*imag(c) }

// joint is −Σ w ln[det S/(det Sxx det Syy)] of all streams with power and the
// codes together. pairCross locates the codes' own cross-spectrum.
func (v *evaluator) joint(band spectral.Band, e int, streams, codes sums, pair []int, pairCross int) float64 {
	bins := v.p.methods[e].design.Bins()
	order := make([]int, 0, len(v.p.streams))
	sum := 0.0
	for i, w := range band.Weight {
		if w == 0 {
			continue
		}
		k := band.First + i
		order = order[:0]
		for s := range v.p.streams {
			if v.p.masks[e][s][k] {
				order = append(order, s)
			}
		}
		v.fill(k, bins, order, pair, pairCross, streams, codes)
		sum += w * v.matrix.LogDetRatio(len(order))
	}
	return sum
}

// fill sets the matrix to the streams in order, then the codes, at bin k.
func (v *evaluator) fill(k, bins int, order, codeList []int, pairCross int, streams, codes sums) {
	p := v.p
	v.matrix.Resize(len(order) + len(codeList))
	for i, s := range order {
		v.matrix.Set(i, i, complex(streams.auto[s*bins+k], 0))
		for j, t := range order[:i] {
			c := complex(0, 0)
			if s > t {
				c = streams.cross[streamCross(s, t)*bins+k]
			} else {
				c = streams.cross[streamCross(t, s)*bins+k]
				c = complex(real(c), -imag(c))
			}
			v.matrix.Set(i, j, c)
		}
	}
	for a, c := range codeList {
		i := len(order) + a
		v.matrix.Set(i, i, complex(codes.auto[c*bins+k], 0))
		for j, s := range order {
			v.matrix.Set(i, j, codes.cross[p.codeCross(c, s)*bins+k])
		}
	}
	if len(codeList) == 2 {
		v.matrix.Set(len(order)+1, len(order), codes.cross[pairCross*bins+k])
	}
}

// split is the control of a pair, in nats/s: one half of the cells fires Poisson
// spikes whose rate follows the first stream, the other half the second, and so
// on, each at the recorded spikes/s a cell and with the relative depth at which
// the recorded event rate follows its best stream. Superposed Poisson cells of
// rate r and relative modulation m have the signal-to-noise ratio N r |m|²
// (derived in the documentation of scenarios/synthetic).
func (v *evaluator) split(band spectral.Band, streams, codes sums, of ensemble, n float64, bins int) float64 {
	p := v.p
	if of.eventsPerS == 0 || of.spikesPerS == 0 {
		return 0
	}
	df := band.Weight
	events := part(codes.auto, p.codes.event, bins)
	depth2 := 0.0 // variance of the relative modulation of the event rate
	for s := range p.streams {
		sxx, sxy := part(streams.auto, s, bins), part(codes.cross, p.codeCross(p.codes.event, s), bins)
		sum := 0.0
		for i, w := range df {
			k := band.First + i
			if d := sxx[k] * events[k]; d > 0 {
				msc := spectral.Debias(power(sxy[k])/d, n, 0)
				sum += 2 * w * msc * events[k] / codes.tally.Items
			}
		}
		mean := of.eventsPerS * p.bin // events a bin, as the densities are of counts a bin
		depth2 = math.Max(depth2, sum/(mean*mean))
	}
	share := float64(of.cells) / float64(len(p.streams))
	rate := of.spikesPerS / float64(of.cells)
	nats := 0.0
	for s := range p.streams {
		sxx := part(streams.auto, s, bins)
		variance := 0.0
		for i, w := range df {
			variance += 2 * w * sxx[band.First+i]
		}
		if variance == 0 {
			continue
		}
		for i, w := range df {
			nats += w * math.Log1p(share*rate*depth2*sxx[band.First+i]/variance)
		}
	}
	return nats
}
