package report

import (
	"fmt"
	"slices"
	"strings"

	"codeassay/bench"
	"codeassay/estimators"
)

// marked writes bits/s as tables of many sizes do.
func marked(r *bench.Row) cell {
	if r == nil {
		return cell{absent, faint}
	}
	d := min(decimals(r.BitsPerS, r.CILow, r.CIHigh), 3)
	if r.Detected || !r.BitsPerS.Known() {
		return cell{text: fixed(r.BitsPerS, d)}
	}
	return cell{fixed(r.BitsPerS, d) + undetected, faint}
}

// legend explains the mark if any cell of the tables bears it.
func legend(out []block) []block {
	for _, b := range out {
		t, ok := b.(table)
		if !ok {
			continue
		}
		for _, row := range t.rows {
			for _, c := range row {
				if strings.HasSuffix(c.text, undetected) {
					return append(out, paragraph{text: undetected + " not detected; the number is the estimate as it came out.", tone: faint})
				}
			}
		}
	}
	return out
}

// bySize tells how bits/s grow with the ensemble, code by size.
func (v *view) bySize() []block {
	var out []block
	for _, g := range v.of(v.primary, false) {
		sizes := g.sizes()
		if len(sizes) < 2 {
			continue
		}
		head := fmt.Sprintf("About %s, %s", plain(g.stream), g.where())
		t := table{caption: "Bits/s by ensemble size. " + head, columns: []column{{head: "code \\ cells", wrap: true}}}
		for _, n := range sizes {
			t.columns = append(t.columns, column{head: count(int64(n)), number: true, thin: true})
		}
		for _, code := range g.codes() {
			row := []cell{{text: plain(code)}}
			for _, n := range sizes {
				row = append(row, marked(g.find(code, n)))
			}
			t.rows = append(t.rows, row)
		}
		out = append(out, heading{3, head}, t)
	}
	if out == nil {
		return nil
	}
	return legend(append([]block{heading{2, "Bits/s by ensemble size"}}, out...))
}

// partial tells what codes say of a stream that the other streams do not.
func (v *view) partial(verbose bool) []block {
	groups := v.of(v.primary, true)
	if len(groups) == 0 {
		return nil
	}
	out := []block{heading{2, "Partial information"}, paragraph{tone: faint,
		text: "What a code says about a stream beyond what it owes to the streams that are given."}}
	for _, g := range groups {
		if verbose {
			out = append(out, v.ranked(g, true)...)
			continue
		}
		out = append(out, v.partialTable(g)...)
	}
	return legend(out)
}

// partialTable sets partial information beside the whole, at the largest size.
func (v *view) partialTable(g *group) []block {
	cells := g.largest()
	given := listed(plainAll(strings.Split(g.given, "\n")))
	head := fmt.Sprintf("About %s, given %s, %s, %s", plain(g.stream), given, g.where(), counted(int64(cells), "cell"))
	whole := g.scope
	whole.given = ""
	alone := v.like(whole)
	rows := g.at(cells)
	t := table{caption: "Partial information. " + head, columns: []column{
		{head: "code", wrap: true},
		{head: "alone", unit: "(bits/s)", number: true},
		{head: "given", unit: "(bits/s)", number: true},
		{head: percent(rows[0].Confidence, 3) + " interval", unit: "(bits/s)", number: true, expendable: 1},
		{head: "for new cells", unit: "(bits/s)", number: true, expendable: 2},
	}}
	for _, r := range rows {
		beside := cell{absent, faint}
		if alone != nil {
			beside = marked(alone.find(r.Code, cells))
		}
		value := marked(r)
		t.rows = append(t.rows, []cell{{text: plain(r.Code)}, beside, value,
			{span(r.BitsPerS, r.CILow, r.CIHigh), value.tone}, {span(r.BitsPerS, r.CICellsLow, r.CICellsHigh), value.tone}})
	}
	return []block{heading{3, head}, t}
}

// byChance sets the burst-free surrogate beside the data.
func (v *view) byChance() []block {
	var out []block
	for _, g := range v.chance {
		if g.estimator != v.primary {
			continue
		}
		cells := g.largest()
		head := fmt.Sprintf("About %s, %s, %s", plain(g.stream), g.where(), counted(int64(cells), "cell"))
		t := table{caption: "Burst-free surrogate. " + head, columns: []column{
			{head: "code", wrap: true},
			{head: "data", unit: "(bits/s)", number: true},
			{head: "surrogate", unit: "(bits/s)", number: true},
			{head: percent(g.rows[0].Confidence, 3) + " interval", unit: "(bits/s)", number: true, expendable: 1},
		}}
		data := v.like(g.scope)
		for _, r := range g.at(cells) {
			beside := cell{absent, faint}
			if data != nil {
				beside = marked(data.find(r.Code, cells))
			}
			surrogate := marked(r)
			t.rows = append(t.rows, []cell{{text: plain(r.Code)}, beside, surrogate, {span(r.BitsPerS, r.CILow, r.CIHigh), surrogate.tone}})
		}
		out = append(out, heading{3, head}, t)
	}
	if out == nil {
		return nil
	}
	return legend(append([]block{heading{2, "What chance bursts alone would carry"}, paragraph{tone: faint,
		text: "The surrogate has the same event rates and no bursts of its own: short intervals come by chance only. " +
			"A burst code that does not carry clearly more than its surrogate may say no more than the event rate."}}, out...))
}

// like is the group of data in a scope, nil where there is none.
func (v *view) like(s scope) *group {
	for _, d := range v.groups {
		if d.scope == s {
			return d
		}
	}
	return nil
}

// others sets further estimators beside the primary where they measure the same
// quantity, and on their own where they do not.
func (v *view) others(verbose bool) []block {
	var like, unlike []string
	quantity := v.quantity(v.primary)
	for _, e := range v.estimators()[1:] {
		if v.quantity(e) == quantity {
			like = append(like, e)
		} else {
			unlike = append(unlike, e)
		}
	}
	var out []block
	if len(like) > 0 {
		out = append(out, heading{2, "By other estimators"}, paragraph{tone: faint,
			text: "The same quantity: " + meaning(quantity) + "."})
		out = append(out, v.beside(append([]string{v.primary}, like...))...)
	}
	for _, names := range v.byQuantity(unlike) {
		out = append(out, heading{2, quantityHead(v.quantity(names[0]))}, paragraph{tone: faint,
			text: "Another quantity, not to be held against the numbers above: " + meaning(v.quantity(names[0])) + "."})
		if verbose {
			for _, e := range names {
				for _, g := range v.of(e, false) {
					out = append(out, paragraph{text: "By " + plain(e) + ":"})
					out = append(out, v.ranked(g, false)...)
				}
			}
			continue
		}
		out = append(out, v.beside(names)...)
	}
	return legend(out)
}

// byQuantity splits estimators by what they measure, in order of appearance.
func (v *view) byQuantity(names []string) [][]string {
	var out [][]string
	for _, e := range names {
		i := slices.IndexFunc(out, func(in []string) bool { return v.quantity(in[0]) == v.quantity(e) })
		if i < 0 {
			out = append(out, nil)
			i = len(out) - 1
		}
		out[i] = append(out[i], e)
	}
	return out
}

func quantityHead(q estimators.Quantity) string {
	switch q {
	case estimators.WindowInformation:
		return "Window information"
	case estimators.CoherenceRate:
		return "Coherence rate"
	}
	return plain(string(q))
}

// beside is, for every stream and band, a table of codes by estimators of one
// quantity at the largest size.
func (v *view) beside(names []string) []block {
	var out []block
	for _, g := range v.of(names[0], false) {
		cells := g.largest()
		head := fmt.Sprintf("About %s, %s, %s", plain(g.stream), g.where(), counted(int64(cells), "cell"))
		t := table{caption: "By estimator. " + head, columns: []column{{head: "code", wrap: true}}}
		var columns []*group
		for i, e := range names {
			s := g.scope
			s.estimator = e
			columns = append(columns, v.like(s))
			t.columns = append(t.columns,
				column{head: plain(e), unit: "(bits/s)", number: true, expendable: min(i, 1)},
				column{head: "interval", number: true, expendable: min(2+i, spare-1)})
		}
		for _, code := range g.codes() {
			row := []cell{{text: plain(code)}}
			for _, c := range columns {
				var r *bench.Row
				if c != nil {
					r = c.find(code, cells)
				}
				value, interval := marked(r), absent
				if r != nil {
					interval = span(r.BitsPerS, r.CILow, r.CIHigh)
				}
				row = append(row, value, cell{interval, value.tone})
			}
			t.rows = append(t.rows, row)
		}
		out = append(out, heading{3, head}, t)
	}
	return out
}
