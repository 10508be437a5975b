package rank

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"

	"codeassay/bench"
	"codeassay/estimators/resampling"
)

// family is what codes are ranked within.
type family struct {
	size, estimator, stream, band int
	kind                          bench.RowKind
}

// rankFamilies sets rank and letters: codes that were detected, by bits/s, and
// letters by Holm's procedure over all pairs of them, paired over blocks and
// draws. doc.Rows must be in Assemble's order.
func (a *assembler) rankFamilies(doc *bench.Document) {
	type member struct{ row, at int }
	var order []family
	members := map[family][]member{}
	at := 0
	for size := range a.out.Layout.Sizes {
		for row, key := range a.out.Layout.Rows {
			if key.Kind != bench.Single && key.Kind != bench.Partial {
				continue
			}
			f := family{size, key.Estimator, key.Stream, key.Band, key.Kind}
			if members[f] == nil {
				order = append(order, f)
			}
			members[f] = append(members[f], member{row, at})
			at++
		}
	}
	for _, f := range order {
		var in []member
		for _, m := range members[f] {
			if doc.Rows[m.at].Detected {
				in = append(in, m)
			}
		}
		slices.SortStableFunc(in, func(x, y member) int {
			bx, by := doc.Rows[x.at].BitsPerS, doc.Rows[y.at].BitsPerS
			switch {
			case bx > by:
				return -1
			case bx < by:
				return 1
			}
			return x.row - y.row
		})
		rows := make([]int, len(in))
		for i, m := range in {
			rows[i] = m.row
		}
		different := a.different(f.size, rows)
		letters := resampling.Letters(len(in), different)
		for i, m := range in {
			rank := i + 1
			doc.Rows[m.at].Rank = &rank
			doc.Rows[m.at].Letters = letters[i]
		}
	}
}

// different tells which rows differ at the sweep's family-wise level.
func (a *assembler) different(size int, rows []int) func(i, j int) bool {
	n := len(rows)
	var p []float64
	for i := range n {
		for j := range i {
			p = append(p, a.pairTest(size, rows[i], rows[j]))
		}
	}
	adjusted := resampling.Holm(p)
	level := 1 - a.out.Layout.Confidence
	return func(i, j int) bool {
		if i == j {
			return false
		}
		i, j = max(i, j), min(i, j)
		return adjusted[i*(i-1)/2+j] < level
	}
}

// pairTest is the two-sided p-value of no difference between two rows of a size.
func (a *assembler) pairTest(size, x, y int) float64 {
	e := a.combine(size, func(d draw) float64 { return d.full(x) - d.full(y) },
		func(d draw, block int) float64 { return d.deleted(block, x) - d.deleted(block, y) })
	v := a.variance(e)
	// Codes that are the same signal differ by rounding only.
	scale := math.Abs(a.estimate(size, x).mean)
	if math.Abs(e.mean) <= 1e-9*scale {
		return 1
	}
	if v == 0 {
		return 0
	}
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: a.blockDoF()}
	return 2 * t.Survival(math.Abs(e.mean)/math.Sqrt(v))
}
