package report

import (
	"fmt"
	"slices"
	"strings"

	"github.com/olekukonko/tablewriter"
	"github.com/olekukonko/tablewriter/renderer"
	"github.com/olekukonko/tablewriter/tw"
)

// gap is the space between columns.
const gap = 2

// A column that may be broken is shrunk to comfortable before other columns are
// left out, and to narrowest where nothing is left to leave out.
const (
	comfortable  = 16
	narrowest    = 10
	shortestHead = 8 // of a heading, or its longest word
)

// table fits a table to the width, sets it, and says what was left out.
func (p *typesetter) table(t table) error {
	t = aligned(t)
	t, remark := fitted(t, p.Width)
	header := make([]string, len(t.columns))
	align := make([]tw.Align, len(t.columns))
	pad := make([]tw.Padding, len(t.columns))
	for i, c := range t.columns {
		header[i] = p.spaced(cell{text: c.heading()}, i)
		align[i], pad[i] = tw.AlignLeft, tw.PaddingNone
		if c.number {
			align[i] = tw.AlignRight
		}
	}
	var body strings.Builder
	set := tablewriter.NewTable(&body,
		tablewriter.WithRenderer(renderer.NewBlueprint(tw.Rendition{
			Borders: tw.BorderNone,
			Symbols: tw.NewSymbolCustom("rule").WithRow("─").WithColumn("").WithCenter("─").WithMidLeft("─").WithMidRight("─"),
			Settings: tw.Settings{
				Lines:      tw.Lines{ShowTop: tw.Off, ShowBottom: tw.Off, ShowHeaderLine: tw.On, ShowFooterLine: tw.Off},
				Separators: tw.Separators{ShowHeader: tw.On, ShowFooter: tw.Off, BetweenRows: tw.Off, BetweenColumns: tw.Off},
			},
		})),
		tablewriter.WithEastAsian(tw.Off),
		tablewriter.WithTrimSpace(tw.Off),
		tablewriter.WithHeaderAutoFormat(tw.Off),
		tablewriter.WithHeaderAutoWrap(tw.WrapNone),
		tablewriter.WithRowAutoWrap(tw.WrapNone),
		tablewriter.WithHeaderAlignmentConfig(tw.CellAlignment{PerColumn: align}),
		tablewriter.WithRowAlignmentConfig(tw.CellAlignment{PerColumn: align}),
		tablewriter.WithHeaderPaddingPerColumn(pad),
		tablewriter.WithRowPaddingPerColumn(pad),
	)
	set.Header(header)
	for _, row := range t.rows {
		line := make([]string, len(row))
		for i, c := range row {
			line[i] = p.spaced(c, i)
		}
		if err := set.Append(line); err != nil {
			return fmt.Errorf("report: table %q: %w", t.caption, err)
		}
	}
	if err := set.Render(); err != nil {
		return fmt.Errorf("report: table %q: %w", t.caption, err)
	}
	for _, l := range strings.Split(strings.TrimRight(body.String(), "\n"), "\n") {
		p.line(strings.TrimRight(l, " "), neutral)
	}
	if remark != "" && !p.told[remark] {
		p.told[remark] = true
		p.lines(remark, "", "", faint)
	}
	return nil
}

// spaced is a cell with the gap before it, on each of its lines.
func (p *typesetter) spaced(c cell, column int) string {
	parts := strings.Split(c.text, "\n")
	for i := range parts {
		parts[i] = p.paint(parts[i], c.tone)
		if column > 0 {
			parts[i] = strings.Repeat(" ", gap) + parts[i]
		}
	}
	return strings.Join(parts, "\n")
}

// heading is the column's heading, its unit on a second line.
func (c column) heading() string {
	if c.unit == "" {
		return c.head
	}
	return c.head + "\n" + c.unit
}

// aligned pads the cells of point columns so that decimal points stand under
// each other, and those of other number columns so that a mark after some of
// them does not shift their digits.
func aligned(t table) table {
	tail := func(s string) int {
		if i := strings.IndexByte(s, '.'); i >= 0 {
			return len(s) - i
		}
		return 0
	}
	out := t.copied()
	for c, col := range t.columns {
		if !col.number {
			continue
		}
		measure := func(s string) int { return strings.Count(s, undetected) }
		if col.point {
			measure = tail
		}
		longest := 0
		for _, row := range t.rows {
			longest = max(longest, measure(row[c].text))
		}
		for _, row := range out.rows {
			row[c].text += strings.Repeat(" ", longest-measure(row[c].text))
		}
	}
	return out
}

// widths of a table's columns.
func widths(t table) []int {
	out := make([]int, len(t.columns))
	for c, col := range t.columns {
		out[c] = displayWidth(strings.Split(col.heading(), "\n")...)
		for _, row := range t.rows {
			out[c] = max(out[c], displayWidth(strings.Split(row[c].text, "\n")...))
		}
	}
	return out
}

func total(w []int) int {
	sum := gap * (len(w) - 1)
	for _, x := range w {
		sum += x
	}
	return sum
}

// fitted leaves out and breaks what a width does not hold, and says so: first
// luxuries go, then long names are broken, then further columns go.
func fitted(t table, width int) (table, string) {
	var gone []string
	for {
		worst := mostExpendable(t)
		c := t.columns[worst]
		tried := t
		if c.expendable < spare {
			tried = shrunk(t, width, comfortable)
		}
		if c.expendable == 0 || total(widths(tried)) <= width {
			break
		}
		if c.expendable < spare && !slices.Contains(gone, c.name()) {
			gone = append(gone, c.name())
		}
		t = t.keep(func(i int) bool { return i != worst })
	}
	remark := ""
	if len(gone) > 0 {
		remark = "Left out at this width: " + listed(gone) + "."
	}
	if thinned, kept, of := thin(t, width); kept < of {
		t = thinned
		remark = strings.TrimSpace(remark + fmt.Sprintf(" %d of %d columns fit this width; a wider line or another format shows all.", kept, of))
	}
	return shrunk(t, width, narrowest), remark
}

func mostExpendable(t table) int {
	worst := 0
	for i, c := range t.columns {
		if c.expendable >= t.columns[worst].expendable {
			worst = i
		}
	}
	return worst
}

// thin leaves out an even choice of alike columns until the rest fits.
func thin(t table, width int) (out table, kept, of int) {
	out, kept, of = thinTo(t, len(t.columns))
	for kept > 2 && total(widths(shrunk(out, width, comfortable))) > width {
		out, kept, of = thinTo(t, kept-1)
	}
	return out, kept, of
}

// thinTo keeps at most so many, at least two, of the alike columns of a table,
// evenly chosen, the first and the last among them.
func thinTo(t table, most int) (out table, kept, of int) {
	var alike []int
	for i, c := range t.columns {
		if c.thin {
			alike = append(alike, i)
		}
	}
	of = len(alike)
	kept = min(of, max(most, 2))
	stays := make([]bool, len(t.columns))
	for i, c := range t.columns {
		stays[i] = !c.thin
	}
	for k := range kept {
		at := 0
		if kept > 1 {
			at = (k*(of-1) + (kept-1)/2) / (kept - 1)
		}
		stays[alike[at]] = true
	}
	return t.keep(func(i int) bool { return stays[i] }), kept, of
}

// shrunk breaks headings that are wider than what stands below them, then the
// cells of columns that allow it, down to least, so that the table has the width
// or as near as can be.
func shrunk(t table, width, least int) table {
	w := widths(t)
	over := total(w) - width
	if over <= 0 {
		return t
	}
	out := t.copied()
	for c, col := range t.columns {
		if over <= 0 {
			break
		}
		body := 0
		for _, row := range t.rows {
			body = max(body, displayWidth(row[c].text))
		}
		if to := max(body, shortestHead, w[c]-over); to < w[c] && !col.wrap {
			out.columns[c].head = strings.Join(wrapped(col.head, to), "\n")
			now := displayWidth(append(strings.Split(out.columns[c].heading(), "\n"), strings.Repeat(" ", body))...)
			over -= w[c] - now
			w[c] = now
		}
	}
	for c, col := range t.columns {
		if !col.wrap || over <= 0 {
			continue
		}
		to := max(w[c]-over, min(w[c], least))
		over -= w[c] - to
		for _, row := range out.rows {
			row[c].text = strings.Join(wrapped(row[c].text, to), "\n")
		}
	}
	return out
}
