package report

import (
	"slices"
	"strings"

	"codeassay/bench"
	"codeassay/estimators"
)

// scope is what a table of rows has in common.
type scope struct {
	input     float64 // input bandwidth in Hz, 0 where it was not varied
	low, high float64 // band in Hz
	stream    string
	given     string // names joined by a line break, which no name keeps
	estimator string
}

func scopeOf(r *bench.Row) scope {
	return scope{input: orZero(r.InputBandwidthHz), low: orZero(r.BandLowHz), high: orZero(r.BandHz),
		stream: r.Stream, given: strings.Join(r.Given, "\n"), estimator: r.Estimator}
}

func orZero(n bench.Number) float64 {
	if !n.Known() {
		return 0
	}
	return float64(n)
}

// group is the rows of one scope, in the document's order.
type group struct {
	scope
	rows []*bench.Row
}

// grouped sorts rows into scopes, in order of first appearance.
func grouped(rows []bench.Row) []*group {
	var out []*group
	known := map[scope]*group{}
	for i := range rows {
		s := scopeOf(&rows[i])
		g := known[s]
		if g == nil {
			g = &group{scope: s}
			known[s] = g
			out = append(out, g)
		}
		g.rows = append(g.rows, &rows[i])
	}
	return out
}

// sizes are the ensemble sizes of the group, rising.
func (g *group) sizes() []int {
	var out []int
	for _, r := range g.rows {
		out = append(out, r.Cells)
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// largest is the largest ensemble size.
func (g *group) largest() int {
	s := g.sizes()
	return s[len(s)-1]
}

// at are the rows of one size: by rank, then what is not detected by bits/s.
func (g *group) at(cells int) []*bench.Row {
	var out []*bench.Row
	for _, r := range g.rows {
		if r.Cells == cells {
			out = append(out, r)
		}
	}
	slices.SortStableFunc(out, func(a, b *bench.Row) int {
		switch {
		case a.Rank != nil && b.Rank != nil:
			return *a.Rank - *b.Rank
		case a.Rank != nil:
			return -1
		case b.Rank != nil:
			return 1
		case a.BitsPerS.Known() != b.BitsPerS.Known():
			if a.BitsPerS.Known() {
				return -1
			}
			return 1
		case a.BitsPerS > b.BitsPerS:
			return -1
		case a.BitsPerS < b.BitsPerS:
			return 1
		}
		return 0
	})
	return out
}

// codes are the codes of the group in the order of its largest size, then those
// that only smaller sizes have.
func (g *group) codes() []string {
	var out []string
	for _, r := range g.at(g.largest()) {
		out = append(out, r.Code)
	}
	for _, r := range g.rows {
		if !slices.Contains(out, r.Code) {
			out = append(out, r.Code)
		}
	}
	return out
}

// find is the row of a code at a size, nil where there is none.
func (g *group) find(code string, cells int) *bench.Row {
	for _, r := range g.rows {
		if r.Code == code && r.Cells == cells {
			return r
		}
	}
	return nil
}

// view is a document sorted for reading.
type view struct {
	doc     *bench.Document
	primary string // the estimator that the verdict rests on
	groups  []*group
	chance  []*group
	inputs  []float64 // distinct input bandwidths, in order; {0} where not varied
}

func newView(doc *bench.Document) *view {
	v := &view{doc: doc, groups: grouped(doc.Rows), chance: grouped(doc.Chance)}
	has := func(name string) bool {
		return slices.ContainsFunc(doc.Rows, func(r bench.Row) bool { return r.Estimator == name })
	}
	for _, name := range doc.Settings.Estimate.With {
		if has(name) {
			v.primary = name
			break
		}
	}
	if v.primary == "" && len(doc.Rows) > 0 {
		v.primary = doc.Rows[0].Estimator
	}
	for _, g := range v.groups {
		if !slices.Contains(v.inputs, g.input) {
			v.inputs = append(v.inputs, g.input)
		}
	}
	return v
}

// estimators are all that the rows name, the primary first.
func (v *view) estimators() []string {
	out := []string{v.primary}
	for _, g := range v.groups {
		if !slices.Contains(out, g.estimator) {
			out = append(out, g.estimator)
		}
	}
	return out
}

// quantity is what an estimator's rows mean.
func (v *view) quantity(estimator string) estimators.Quantity {
	for _, g := range v.groups {
		if g.estimator == estimator {
			return g.rows[0].Quantity
		}
	}
	return ""
}

// of are the groups of an estimator, of single or of partial rows.
func (v *view) of(estimator string, partial bool) []*group {
	var out []*group
	for _, g := range v.groups {
		if g.estimator == estimator && (g.given != "") == partial {
			out = append(out, g)
		}
	}
	return out
}

// confidence is that of the intervals, 0.95 where no row says.
func (v *view) confidence() bench.Number {
	for _, r := range v.doc.Rows {
		if r.Confidence.Known() {
			return r.Confidence
		}
	}
	return 0.95
}

// bandText is "0–20 Hz".
func bandText(low, high float64) string {
	return trimmed(bench.Number(low), 4) + "–" + trimmed(bench.Number(high), 4) + " Hz"
}

// where is the band of a scope and, where it was varied, the input bandwidth.
func (s scope) where() string {
	out := bandText(s.low, s.high)
	if s.input > 0 {
		out += ", streams of " + trimmed(bench.Number(s.input), 4) + " Hz"
	}
	return out
}
