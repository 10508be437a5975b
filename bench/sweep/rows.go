package sweep

import (
	"math"

	"codeassay/bench"
	"codeassay/estimators/spectral"
)

// layRows lists every row of the sweep and what is known of it beforehand.
func (p *plan) layRows() {
	p.findPower()
	for e, m := range p.methods {
		for b, band := range p.layout.Bands {
			if !m.info.Spectral {
				if p.window(b) == nil {
					continue
				}
				for s := range p.streams {
					if !band.Streams[s] {
						continue
					}
					for c := range p.codes.shown {
						p.addRow(bench.RowKey{Estimator: e, Kind: bench.Single, Stream: s, Code: c, Pair: -1, Band: b})
						p.addRow(bench.RowKey{Estimator: e, Kind: bench.RawWindow, Stream: s, Code: c, Pair: -1, Band: b})
					}
				}
				continue
			}
			for s := range p.streams {
				if !band.Streams[s] {
					continue
				}
				for c := range p.codes.shown {
					p.addRow(bench.RowKey{Estimator: e, Kind: bench.Single, Stream: s, Code: c, Pair: -1, Band: b})
					if len(p.streams) > 1 {
						p.addRow(bench.RowKey{Estimator: e, Kind: bench.Partial, Stream: s, Code: c, Pair: -1, Band: b})
					}
				}
			}
			if len(p.codes.pairs) == 0 || !p.jointBand(b) {
				continue
			}
			for i := range p.codes.pairs {
				p.addRow(bench.RowKey{Estimator: e, Kind: bench.Joint, Stream: -1, Code: -1, Pair: i, Band: b})
			}
			p.addRow(bench.RowKey{Estimator: e, Kind: bench.JointSpikes, Stream: -1, Code: p.codes.spike, Pair: -1, Band: b})
			p.addRow(bench.RowKey{Estimator: e, Kind: bench.Split, Stream: -1, Code: -1, Pair: -1, Band: b})
		}
	}
}

// jointBand reports whether pairs are read in band b: in every band that the
// study names, and of the streams' own bands in the widest, which holds all.
func (p *plan) jointBand(b int) bool {
	for _, in := range p.layout.Bands[b].Streams {
		if !in {
			return p.layout.Bands[b].High == p.topHz()
		}
	}
	return true
}

func (p *plan) addRow(key bench.RowKey) {
	m := p.methods[key.Estimator]
	info := bench.RowInfo{UsedHz: p.layout.Bands[key.Band].High - p.layout.Bands[key.Band].Low}
	var c rowCells
	if m.info.Spectral {
		c = p.cells(key)
		info.UsedHz = c.all.UsedHz()
		info.NEff = m.tally.NEff()
		info.Segments = int(m.tally.Items) / m.design.Tapers()
		for inputs, band := range c.inputs {
			if inputs > 0 && band.UsedHz() > 0 {
				mean, variance := band.Null(info.NEff-float64(c.given), inputs, c.outputs, m.null)
				info.NullMean += mean
				info.NullVar += variance
			}
		}
	}
	p.layout.Rows = append(p.layout.Rows, key)
	p.rowCells = append(p.rowCells, c)
	p.layout.Info = append(p.layout.Info, info)
}

// rowCells are the frequency cells that a row sums, and the dimensions that its
// bias and its null law depend on.
type rowCells struct {
	all     spectral.Band
	inputs  []spectral.Band // the cells in which i streams have power, by i
	outputs int
	given   int // streams partialled out
}

// bias is the bias of −Σ w ln(det ratio) for n estimates, in nats/s.
func (c rowCells) bias(n float64) float64 {
	sum := 0.0
	for inputs, band := range c.inputs {
		if inputs > 0 && len(band.Weight) > 0 {
			sum -= band.Bias(n-float64(c.given), inputs, c.outputs)
		}
	}
	return sum
}

// cells lists the frequency cells of a row: those of its band in which its
// stream, or for all streams any of them, has power.
func (p *plan) cells(key bench.RowKey) rowCells {
	m := p.methods[key.Estimator]
	span := p.layout.Bands[key.Band]
	masks := p.masks[key.Estimator]
	powered := func(k int) int {
		if key.Stream >= 0 {
			if masks[key.Stream][k] {
				return 1
			}
			return 0
		}
		n := 0
		for s := range masks {
			if masks[s][k] {
				n++
			}
		}
		return n
	}
	c := rowCells{outputs: 1, all: m.design.Band(span.Low, span.High, func(k int) bool { return powered(k) > 0 })}
	for inputs := range len(masks) + 1 {
		c.inputs = append(c.inputs, m.design.Band(span.Low, span.High, func(k int) bool { return powered(k) == inputs }))
	}
	switch key.Kind {
	case bench.Joint:
		c.outputs = 2
	case bench.Partial:
		c.given = len(masks) - 1
	}
	return c
}

// findPower marks, for every spectral estimator and stream, the frequencies at
// which the stream has at least 1e-6 of its peak power density.
func (p *plan) findPower() {
	p.masks = make([][][]bool, len(p.methods))
	for e, m := range p.methods {
		if !m.info.Spectral {
			continue
		}
		scratch := m.design.NewScratch()
		for s := range p.streams {
			power := make([]float64, m.design.Bins())
			for i, span := range p.spans {
				if p.frozen && p.spans[i].Trial > 0 {
					continue
				}
				x := p.streams[s][span.Trial][span.First : span.First+span.Bins]
				m.design.AddAuto(power, m.design.Transforms(nil, x, 0, scratch))
			}
			peak := 0.0
			for _, v := range power {
				peak = math.Max(peak, v)
			}
			mask := make([]bool, len(power))
			for k, v := range power {
				mask[k] = v >= 1e-6*peak
			}
			p.masks[e] = append(p.masks[e], mask)
		}
	}
}
