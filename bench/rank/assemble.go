package rank

import (
	"math"
	"runtime"
	"slices"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/estimators/resampling"
)

// Assemble makes the ranked document of a sweep. truth may be nil.
func Assemble(out *bench.Outcome, study bench.Study, version string, truth *Truth) *bench.Document {
	a := newAssembler(out)
	doc := &bench.Document{Tool: "codeassay", Version: version, Command: "rank", Title: study.Title, Seed: study.Seed,
		Platform: runtime.GOARCH, Recording: out.Recording, Settings: out.Settings,
		Rows: []bench.Row{}, Joint: []bench.JointRow{}, Chance: []bench.Row{}, Spectra: out.Spectra,
		Warnings: slices.Clone(out.Warnings)}
	if doc.Spectra == nil {
		doc.Spectra = []bench.Spectrum{}
	}
	if doc.Warnings == nil {
		doc.Warnings = []estimators.Warning{}
	}
	for size := range out.Layout.Sizes {
		for row, key := range out.Layout.Rows {
			switch key.Kind {
			case bench.Single, bench.Partial:
				doc.Rows = append(doc.Rows, a.row(size, row, truth))
			case bench.Joint:
				doc.Joint = append(doc.Joint, a.joint(size, row, truth))
			}
		}
	}
	a.rankFamilies(doc)
	doc.Chance = a.chance()
	if truth != nil {
		doc.Truth = truth.summary(doc)
	}
	return doc
}

// assembler holds, for every size, the draws that measured it.
type assembler struct {
	out   *bench.Outcome
	draws [][]draw           // by size
	cells []*bench.CellPiece // by size, nil where there is none
}

// draw is one measurement of one size.
type draw struct {
	piece *bench.Piece
	at    int // entry of the piece
}

func (d draw) full(row int) float64           { return d.piece.Value[d.at].Full[row] }
func (d draw) deleted(block, row int) float64 { return d.piece.Value[d.at].Deleted[block][row] }

func newAssembler(out *bench.Outcome) *assembler {
	a := &assembler{out: out, draws: make([][]draw, len(out.Layout.Sizes)), cells: make([]*bench.CellPiece, len(out.Layout.Sizes))}
	pieces := make([]*bench.Piece, len(out.Pieces))
	for i := range out.Pieces {
		pieces[i] = &out.Pieces[i]
	}
	slices.SortFunc(pieces, func(x, y *bench.Piece) int { return x.Draw - y.Draw })
	for _, p := range pieces {
		for at, size := range p.Sizes {
			a.draws[size] = append(a.draws[size], draw{p, at})
		}
	}
	for i := range out.Cells {
		a.cells[out.Cells[i].Size] = &out.Cells[i]
	}
	return a
}

// estimate is the mean over draws of one row, with each block left out in turn.
type estimate struct {
	mean    float64
	deleted []float64
	drawSD  float64
	draws   int
}

func (a *assembler) estimate(size, row int) estimate {
	return a.combine(size, func(d draw) float64 { return d.full(row) }, func(d draw, block int) float64 { return d.deleted(block, row) })
}

func (a *assembler) combine(size int, full func(draw) float64, deleted func(draw, int) float64) estimate {
	draws := a.draws[size]
	e := estimate{draws: len(draws), deleted: make([]float64, len(a.out.Layout.BlockWeights))}
	n := float64(len(draws))
	for _, d := range draws {
		e.mean += full(d) / n
		for j := range e.deleted {
			e.deleted[j] += deleted(d, j) / n
		}
	}
	if len(draws) > 1 {
		for _, d := range draws {
			e.drawSD += (full(d) - e.mean) * (full(d) - e.mean) / (n - 1)
		}
		e.drawSD = math.Sqrt(e.drawSD)
	}
	return e
}

// variance is the delete-a-block variance of an estimate.
func (a *assembler) variance(e estimate) float64 {
	v, _ := resampling.Jackknife(e.mean, e.deleted, a.out.Layout.BlockWeights)
	return v
}

func (a *assembler) blockDoF() float64 { return float64(len(a.out.Layout.BlockWeights) - 1) }

func (a *assembler) row(size, row int, truth *Truth) bench.Row {
	l := &a.out.Layout
	key, info := l.Rows[row], l.Info[row]
	band := l.Bands[key.Band]
	e := a.estimate(size, row)
	v := a.variance(e)
	r := bench.Row{
		Stream: l.Streams[key.Stream], Given: a.given(key), Code: l.Codes[key.Code].Name, Cells: l.Sizes[size],
		BandLowHz: bench.Number(band.Low), BandHz: bench.Number(band.High), UsedHz: bench.Number(info.UsedHz),
		InputBandwidthHz: bench.None, Estimator: l.Estimators[key.Estimator].Name, Quantity: l.Estimators[key.Estimator].Quantity,
		BitsPerS: bench.Number(e.mean), Confidence: bench.Number(l.Confidence), DrawSD: bench.Number(e.drawSD), Draws: e.draws,
		BitsPerSpike: bench.None, BitsPerEvent: bench.None, DelayMS: bench.Number(a.out.DelaysMS[key.Stream]),
		Segments: info.Segments, NEff: bench.Number(info.NEff), TruthBitsPerS: bench.None, Warnings: []estimators.Warning{},
	}
	if !l.Estimators[key.Estimator].Spectral {
		r.Segments, r.NEff = 0, bench.None
	}
	low, high := resampling.TInterval(e.mean, v, a.blockDoF(), l.Confidence)
	r.CILow, r.CIHigh = bench.Number(low), bench.Number(high)
	r.CICellsLow, r.CICellsHigh = a.cellsInterval(size, row, e.mean, v)
	r.PValue = bench.Number(a.pValue(size, row, e))
	r.Detected = r.PValue.Known() && float64(r.PValue) < 1-l.Confidence
	if spikes, events := a.counts(size); r.Detected && spikes > 0 {
		r.BitsPerSpike = bench.Number(e.mean / spikes)
		r.BitsPerEvent = bench.Number(e.mean / events)
	}
	if truth != nil && l.Estimators[key.Estimator].Spectral {
		r.TruthBitsPerS = truth.row(l, key, l.Sizes[size])
	}
	if v == 0 && e.mean == 0 {
		r.Warnings = append(r.Warnings, estimators.Warning{Severity: estimators.Note, About: r.Code,
			Text: "this code never changes at this size, so it carries nothing", Remedy: "more cells, or a recording with bursts"})
	}
	return r
}

func (a *assembler) given(key bench.RowKey) []string {
	given := []string{}
	if key.Kind == bench.Partial {
		for s, name := range a.out.Layout.Streams {
			if s != key.Stream {
				given = append(given, name)
			}
		}
	}
	return given
}

// counts are the mean spikes/s and events/s of the sub-ensembles of a size.
func (a *assembler) counts(size int) (spikes, events float64) {
	for _, d := range a.draws[size] {
		spikes += d.piece.SpikesPerS[d.at] / float64(len(a.draws[size]))
		events += d.piece.EventsPerS[d.at] / float64(len(a.draws[size]))
	}
	return spikes, events
}

// cellsInterval is the interval for new cells from the same population. To the
// block variance of the draw mean it adds what ensembles vary beyond the spiking
// noise that block and cell variances both contain, times the share of it that
// is left in a mean over draws from M cells: N/M of it is common to all draws, to
// first order in the cells' contributions (Hoeffding 1948, Ann. Math. Stat.
// 19:293–325), the rest averages out.
func (a *assembler) cellsInterval(size, row int, mean, blockVar float64) (low, high bench.Number) {
	l := &a.out.Layout
	share := float64(l.Sizes[size]) / float64(l.Cells)
	var cellVar, cellDoF float64
	switch l.CellsMeasured(size) {
	case bench.ByDraws:
		cellVar, cellDoF = a.betweenDraws(size, row)/(1-share), float64(len(a.draws[size])-1)
	case bench.ByGroups:
		c := a.cells[size]
		cellVar, cellDoF = c.CellVar[row]-c.CrossVar[row], float64(c.Groups-1)
	default:
		return bench.None, bench.None
	}
	left := share + (1-share)/float64(len(a.draws[size]))
	cellVar = left * math.Max(0, cellVar)
	// Welch 1947, Biometrika 34:28–35, and Satterthwaite 1946, Biometrics 2:110–114.
	dof := a.blockDoF()
	if total := blockVar + cellVar; total > 0 {
		dof = total * total / (blockVar*blockVar/a.blockDoF() + cellVar*cellVar/cellDoF)
	}
	lo, hi := resampling.TInterval(mean, blockVar+cellVar, dof, l.Confidence)
	return bench.Number(lo), bench.Number(hi)
}

// betweenDraws is the variance between the draws of a size beyond their spiking
// noise: a two-way analysis of variance of jackknife pseudo-values, draws by
// blocks, whose interaction is the noise that cells have of their own in each
// block. Draws of N from M cells show 1−N/M of it.
func (a *assembler) betweenDraws(size, row int) float64 {
	draws, blocks := a.draws[size], len(a.out.Layout.BlockWeights)
	total := 0.0
	for _, w := range a.out.Layout.BlockWeights {
		total += w
	}
	pseudo := make([][]float64, len(draws))
	byDraw, byBlock, all := make([]float64, len(draws)), make([]float64, blocks), 0.0
	for d, draw := range draws {
		pseudo[d] = make([]float64, blocks)
		for j := range blocks {
			h := total / a.out.Layout.BlockWeights[j]
			v := h*draw.full(row) - (h-1)*draw.deleted(j, row)
			pseudo[d][j] = v
			byDraw[d] += v / float64(blocks)
			byBlock[j] += v / float64(len(draws))
			all += v / float64(blocks*len(draws))
		}
	}
	between, noise := 0.0, 0.0
	for d := range draws {
		between += (byDraw[d] - all) * (byDraw[d] - all) / float64(len(draws)-1)
		for j := range blocks {
			e := pseudo[d][j] - byDraw[d] - byBlock[j] + all
			noise += e * e / float64((len(draws)-1)*(blocks-1))
		}
	}
	return between - noise/float64(blocks)
}

// pValue tests independence. The statistic is the draw mean, uncorrected, in
// nats/s; its law under the null is a gamma with the mean of one draw and the
// variance of the mean of overlapping draws.
func (a *assembler) pValue(size, row int, e estimate) float64 {
	l := &a.out.Layout
	key, info := l.Rows[row], l.Info[row]
	mean, variance := info.NullMean, info.NullVar
	statistic := e.mean*math.Ln2 + mean
	spread := e.drawSD * math.Ln2
	if !l.Estimators[key.Estimator].Spectral {
		raw := row
		if key.Kind == bench.Single {
			raw++ // its RawWindow row follows
		}
		re := a.estimate(size, raw)
		statistic, spread = re.mean*math.Ln2, re.drawSD*math.Ln2
		mean, variance = 0, 0
		for _, d := range a.draws[size] {
			mean += d.piece.NullMean[d.at][raw] / float64(re.draws)
			variance += d.piece.NullVar[d.at][raw] / float64(re.draws)
		}
		if !(variance > 0) {
			return math.NaN()
		}
	}
	return resampling.GammaTail(statistic, mean, meanVariance(variance, spread, e.draws, l.Sizes[size], l.Cells))
}

// meanVariance is the variance, under the null, of the mean over draws of a
// statistic that varies by variance over recordings, when its observed spread
// between the draws is sd. What the draws do not share averages out. The share
// is never taken below what overlapping draws of independent cells have in
// common: statistics quadratic in the codes correlate as the overlap squared.
func meanVariance(variance, sd float64, draws, cells, of int) float64 {
	if draws < 2 {
		return variance
	}
	d := float64(draws)
	overlap := float64(cells) / float64(of)
	least := variance * (1/d + (1-1/d)*overlap*overlap)
	return math.Max(least, variance-(1-1/d)*sd*sd)
}
