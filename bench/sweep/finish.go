package sweep

import (
	"math"

	"codeassay/bench"
	"codeassay/estimators/discrete"
	"codeassay/estimators/resampling"
	"codeassay/estimators/seed"
)

// finisher turns finished jobs into values. Each worker owns one.
type finisher struct {
	p         *plan
	evaluator *evaluator
	streams   [][]sums // method, block; the last entry of a method is the total
}

func (p *plan) newFinisher(streams [][]sums) *finisher {
	return &finisher{p: p, evaluator: newEvaluator(p), streams: streams}
}

// total adds the blocks of every method, in order, behind them.
func (p *plan) totals(blocks [][]sums, fresh func(e int) sums) [][]sums {
	for e, m := range p.methods {
		if !m.info.Spectral {
			continue
		}
		all := fresh(e)
		for _, s := range blocks[e] {
			all.add(s)
		}
		blocks[e] = append(blocks[e], all)
	}
	return blocks
}

// values are the rows of one snapshot, over all blocks and with each left out.
func (f *finisher) values(snap *snapshot) bench.Values {
	p := f.p
	rows, blocks := len(p.layout.Rows), len(p.blocks)
	out := bench.Values{Full: make([]float64, rows), Deleted: make([][]float64, blocks)}
	for j := range out.Deleted {
		out.Deleted[j] = make([]float64, rows)
	}
	for e, m := range p.methods {
		if !m.info.Spectral {
			continue
		}
		streamAll := f.streams[e][blocks]
		all := p.newCodeSums(e)
		for _, s := range snap.sums[e] {
			all.add(s)
		}
		f.evaluator.rates(out.Full, e, streamAll, all, snap.of)
		restStreams, rest := p.newStreamSums(e), p.newCodeSums(e)
		for j := range blocks {
			restStreams.less(streamAll, f.streams[e][j], nil)
			rest.less(all, snap.sums[e][j], nil)
			f.evaluator.rates(out.Deleted[j], e, restStreams, rest, snap.of)
		}
	}
	for i := range p.windows {
		f.windowValues(&p.windows[i], p.countWindows(i, snap), out.Full, out.Deleted)
	}
	return out
}

// windowTables are the joint tables of every stream and code, block by block.
type windowTables struct {
	byBlock [][][]windowTable // stream, code, block
	all     [][]windowTable   // stream, code
	levels  [][]uint8         // code, window
	columns []int             // code: levels in use
}

// countWindows quantises the codes' window sums and counts them against the
// streams' levels.
func (p *plan) countWindows(i int, snap *snapshot) windowTables {
	w := &p.windows[i]
	t := windowTables{byBlock: make([][][]windowTable, len(p.streams)), all: make([][]windowTable, len(p.streams))}
	for _, x := range snap.windows[i] {
		levels, used := quantise(nil, x, w.levels)
		t.levels = append(t.levels, levels)
		t.columns = append(t.columns, used)
	}
	for s := range p.streams {
		for c := range t.levels {
			blocks := make([]windowTable, len(p.blocks))
			for j := range blocks {
				blocks[j] = discrete.NewTable(w.rows[s], t.columns[c])
			}
			all := discrete.NewTable(w.rows[s], t.columns[c])
			for k, spans := range p.blocks {
				for _, span := range spans {
					lo := w.first[span]
					hi := lo + p.spans[span].Bins/w.bins
					discrete.Tabulate(blocks[k], w.stream[s][lo:hi], t.levels[c][lo:hi])
				}
				all.Add(blocks[k])
			}
			t.byBlock[s] = append(t.byBlock[s], blocks)
			t.all[s] = append(t.all[s], all)
		}
	}
	return t
}

// windowValues fills the plug-in rows of one band.
func (f *finisher) windowValues(w *windowPlan, t windowTables, full []float64, deleted [][]float64) {
	p := f.p
	perS := 1 / (float64(w.bins) * p.bin)
	for row, key := range p.layout.Rows {
		m := p.methods[key.Estimator]
		if m.info.Spectral || key.Band != w.band {
			continue
		}
		estimate := m.estimates
		if key.Kind == bench.RawWindow {
			estimate = rawInformation
		}
		all := t.all[key.Stream][key.Code]
		full[row] = estimate(all) * perS
		if deleted == nil {
			continue
		}
		for j, block := range t.byBlock[key.Stream][key.Code] {
			rest := all.Clone()
			rest.Subtract(block)
			deleted[j][row] = estimate(rest) * perS
		}
	}
}

func rawInformation(t windowTable) float64 { return discrete.Information(t, discrete.PlugIn) }

// shiftNull measures, by circular shifts of the code against the stream, the
// mean and variance of every plug-in row's raw statistic under independence, in
// nats/s; NaN for spectral rows.
func (f *finisher) shiftNull(snap *snapshot, from seed.Seed, count int) (mean, variance []float64) {
	p := f.p
	mean, variance = make([]float64, len(p.layout.Rows)), make([]float64, len(p.layout.Rows))
	for row := range mean {
		mean[row], variance[row] = math.NaN(), math.NaN()
	}
	for i := range p.windows {
		w := &p.windows[i]
		t := p.countWindows(i, snap)
		perS := math.Ln2 / (float64(w.bins) * p.bin)
		// A second is beyond the correlation of any stream whose band this is.
		exclude := min(int(math.Ceil(1/(float64(w.bins)*p.bin))), w.total/4)
		lags := resampling.Shifts(from.Child("shifts", i).Rand(), w.total, exclude, count)
		for row, key := range p.layout.Rows {
			if key.Kind != bench.RawWindow || key.Band != w.band {
				continue
			}
			values := make([]float64, len(lags))
			table := discrete.NewTable(w.rows[key.Stream], t.columns[key.Code])
			for k, lag := range lags {
				table.Reset()
				discrete.TabulateShifted(table, w.stream[key.Stream], t.levels[key.Code], lag)
				values[k] = rawInformation(table) * perS
			}
			mean[row], variance[row] = meanVariance(values)
		}
	}
	return mean, variance
}

func meanVariance(x []float64) (mean, variance float64) {
	for _, v := range x {
		mean += v / float64(len(x))
	}
	for _, v := range x {
		variance += (v - mean) * (v - mean) / float64(len(x)-1)
	}
	return mean, variance
}

// cellPiece turns a finished deletion job into variances: of deleting a group of
// cells, and of deleting it in one block only. The second is the part that cells
// and blocks share, spiking noise, which both single variances contain.
func (f *finisher) cellPiece(j *job) bench.CellPiece {
	p := f.p
	rows, blocks, groups := len(p.layout.Rows), len(p.blocks), j.groups
	byGroup := matrix(groups, rows)
	byBoth := matrix(groups*blocks, rows)
	for e, m := range p.methods {
		if !m.info.Spectral {
			continue
		}
		all := p.newCodeSums(e)
		for _, s := range j.snapshots[0].sums[e] {
			all.add(s)
		}
		streamAll := f.streams[e][blocks]
		without, mixed := p.newCodeSums(e), p.newCodeSums(e)
		for g := range groups {
			snap := &j.snapshots[1+g]
			without.reset()
			for k := range blocks {
				without.add(snap.sums[e][k])
				mixed.less(all, j.snapshots[0].sums[e][k], &snap.sums[e][k])
				f.evaluator.rates(byBoth[g*blocks+k], e, streamAll, mixed, j.snapshots[0].of)
			}
			f.evaluator.rates(byGroup[g], e, streamAll, without, snap.of)
		}
	}
	for i := range p.windows {
		w := &p.windows[i]
		whole := p.countWindows(i, &j.snapshots[0])
		for g := range groups {
			t := p.countWindows(i, &j.snapshots[1+g])
			f.windowValues(w, t, byGroup[g], nil)
			for k := range blocks {
				f.windowValues(w, whole.swapped(t, k), byBoth[g*blocks+k], nil)
			}
		}
	}
	out := bench.CellPiece{Size: j.sizes[0], Groups: groups, CellVar: make([]float64, rows), CrossVar: make([]float64, rows)}
	for row := range rows {
		out.CellVar[row], _ = resampling.Jackknife(0, column(byGroup, row), nil)
		out.CrossVar[row], _ = resampling.Jackknife(0, column(byBoth, row), nil)
	}
	return out
}

// swapped is t with block k's counts taken from o. Quantised by different cells,
// o may use fewer levels; counts of a level are then of its own.
func (t windowTables) swapped(o windowTables, k int) windowTables {
	out := windowTables{all: make([][]windowTable, len(t.all))}
	for s := range t.all {
		for c, all := range t.all[s] {
			block := o.byBlock[s][c][k]
			if block.Columns() != all.Columns() {
				out.all[s] = append(out.all[s], all)
				continue
			}
			mixed := all.Clone()
			mixed.Subtract(t.byBlock[s][c][k])
			mixed.Add(block)
			out.all[s] = append(out.all[s], mixed)
		}
	}
	return out
}

func matrix(rows, columns int) [][]float64 {
	out := make([][]float64, rows)
	for i := range out {
		out[i] = make([]float64, columns)
	}
	return out
}

func column(m [][]float64, j int) []float64 {
	out := make([]float64, len(m))
	for i := range m {
		out[i] = m[i][j]
	}
	return out
}
