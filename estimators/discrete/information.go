package discrete

import "math"

// Information between the rows and the columns of a table, in bits a sample,
// composed from entropies: H(rows) + H(columns) − H(rows, columns), each under
// the same correction. Never clipped; no samples give 0.
//
// For Jackknife that is the leave-one-sample-out jackknife of the information
// itself. PanzeriTreves infers the bins in use row by row, among the columns
// seen in any row: the bias of the plug-in information is taken for
// [Σ_s (R_s−1) − (R−1)]/(2N ln 2) bits, R columns seen and R_s in use in row s.
//
// With 8 samples a cell, Jackknife is biased by about 1 % where MillerMadow is by
// 3–7 % and PanzeriTreves by 1–5 % (verified by simulation).
func Information(t *Table, m Method) float64 {
	p := t.profile(m)
	if p.total == 0 {
		return 0
	}
	nats := m.kernel(p.total) - p.mean
	n := float64(p.total)
	switch m {
	case MillerMadow:
		nats -= float64(p.cells-p.rows-p.columns+1) / (2 * n)
	case PanzeriTreves:
		excess := -(p.columns - 1)
		for r := range t.rows {
			if p.row[r] > 0 {
				excess += RelevantBins(t.row(r), p.columns) - 1
			}
		}
		nats -= float64(excess) / (2 * n)
	}
	return nats / math.Ln2
}

// InformationVariance is the sampling variance of Information in bits², for
// independent samples: the jackknife's for Jackknife, and for the others the
// first-order Var(log2 p̂_rc/(p̂_r p̂_c))/N, which is zero at independence.
func InformationVariance(t *Table, m Method) float64 {
	p := t.profile(m)
	if p.total == 0 {
		return 0
	}
	sum := 0.0
	for r := range t.rows {
		for c, n := range t.row(r) {
			if n > 0 {
				d := p.gRow[r] + p.gColumn[c] - m.kernel(n) - p.mean
				sum += float64(n) * d * d
			}
		}
	}
	return m.varianceOfMean(sum, p.total) / (math.Ln2 * math.Ln2)
}

// profile is what a table shows of itself: totals, levels and cells seen, the
// kernel of each margin, and the mean of g(n_r) + g(n_c) − g(n_rc) over samples.
type profile struct {
	total                int64
	rows, columns, cells int
	row, column          []int64
	gRow, gColumn        []float64
	mean                 float64
}

func (t *Table) profile(m Method) profile {
	p := profile{row: t.RowCounts(nil), column: t.ColumnCounts(nil)}
	p.gRow, p.gColumn = make([]float64, t.rows), make([]float64, t.columns)
	sum := 0.0
	for r, n := range p.row {
		p.total += n
		if n > 0 {
			p.rows++
			p.gRow[r] = m.kernel(n)
			sum += float64(n) * p.gRow[r]
		}
	}
	for c, n := range p.column {
		if n > 0 {
			p.columns++
			p.gColumn[c] = m.kernel(n)
			sum += float64(n) * p.gColumn[c]
		}
	}
	for _, n := range t.counts {
		if n > 0 {
			p.cells++
			sum -= float64(n) * m.kernel(n)
		}
	}
	if p.total > 0 {
		p.mean = sum / float64(p.total)
	}
	return p
}
