package report

import (
	"image/color"
	"slices"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// entry is one line of a legend: a name behind a sample of how it is drawn.
type entry struct {
	name   string
	line   draw.LineStyle // none where its width is 0
	under  color.Color    // broad stroke beneath, none where nil
	marker draw.GlyphDrawer
	ink    color.Color
}

const (
	sampleWidth  = vg.Length(19)
	legendRow    = vg.Length(10)
	legendGap    = vg.Length(8)
	markerRadius = vg.Length(2)
)

// keyed is a legend laid out in columns for a width. It stands above the plot,
// where it covers no data.
type keyed struct {
	entries []entry
	columns int
	width   vg.Length // of a column
	sample  vg.Length // width of the samples
}

func layLegend(entries []entry, width vg.Length) keyed {
	style := lettering(smallSize)
	k := keyed{sample: 2 * markerRadius}
	for _, e := range entries {
		if e.line.Width > 0 || e.under != nil {
			k.sample = sampleWidth
		}
	}
	for k.columns = min(3, len(entries)); k.columns > 0; k.columns-- {
		k.width = (width - vg.Length(k.columns-1)*legendGap) / vg.Length(k.columns)
		k.entries = slices.Clone(entries)
		whole := true
		names := map[string]bool{}
		for i := range k.entries {
			e := &k.entries[i]
			short := shortened(e.name, style, k.width-k.sample-4)
			whole = whole && short == e.name
			e.name = short
			names[short] = true
		}
		// Many entries may be shortened in two columns, if they stay distinct.
		if whole || k.columns == 2 && len(entries) > 4 && len(names) == len(entries) {
			break
		}
	}
	k.columns = max(k.columns, 1)
	return k
}

func (k keyed) rows() int { return (len(k.entries) + k.columns - 1) / k.columns }

func (k keyed) height() vg.Length { return vg.Length(k.rows()) * legendRow }

// draw sets the legend into the top of c, column after column.
func (k keyed) draw(c draw.Canvas) {
	style := lettering(smallSize)
	style.YAlign = draw.YCenter
	rows := k.rows()
	for i, e := range k.entries {
		x := c.Min.X + vg.Length(i/rows)*(k.width+legendGap)
		y := c.Max.Y - (vg.Length(i%rows)+0.5)*legendRow
		if e.under != nil {
			c.StrokeLine2(draw.LineStyle{Color: e.under, Width: broad}, x, y, x+k.sample, y)
		}
		if e.line.Width > 0 {
			c.StrokeLine2(e.line, x, y, x+k.sample, y)
		}
		if e.marker != nil {
			c.DrawGlyph(draw.GlyphStyle{Color: e.ink, Radius: markerRadius, Shape: e.marker}, vg.Point{X: x + k.sample/2, Y: y})
		}
		c.FillText(style, vg.Point{X: x + k.sample + 4, Y: y}, e.name)
	}
}
