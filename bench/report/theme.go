package report

import (
	"image/color"
	"math"
	"strings"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// The look of every figure: one journal column wide, with text that is 7 to 8 pt
// at that width.
const (
	figureWidth = 85 * vg.Millimeter
	plotHeight  = 58 * vg.Millimeter // without the legend above it
	figureDPI   = 300

	labelSize = 8 // pt
	smallSize = 7 // pt

	hair  = vg.Length(0.6)
	line  = vg.Length(0.9)
	broad = vg.Length(3.2) // truth, under the estimates
)

var (
	ink   = color.NRGBA{0x22, 0x26, 0x2b, 0xff}
	quiet = color.NRGBA{0x80, 0x86, 0x8c, 0xff}
	paper = color.NRGBA{0xff, 0xff, 0xff, 0xff}
)

// inks are told apart with normal sight and with either red-green blindness (a
// test measures it); dashes and markers tell the same without colour.
var inks = []color.NRGBA{
	{0x1d, 0x33, 0x6b, 0xff}, // night blue
	{0xd2, 0x5a, 0x1a, 0xff}, // rust
	{0x2a, 0xa1, 0x98, 0xff}, // sea green
	{0xe0, 0xa9, 0x1b, 0xff}, // amber
	{0x8e, 0x3b, 0x7c, 0xff}, // plum
	{0x6c, 0xb4, 0xee, 0xff}, // sky
	{0x5f, 0x5a, 0x1e, 0xff}, // moss
	{0x96, 0x44, 0xe0, 0xff}, // violet
}

var dashes = [][]vg.Length{nil, {5, 1.8}, {1.6, 1.4}, {5, 1.6, 1.2, 1.6}, {3, 1.6}, {7, 2, 2, 2}, {1, 2.2}, {4, 1.4, 1, 1.4, 1, 1.4}}

// series is the look of the i-th thing that a figure shows.
type series struct {
	ink    color.NRGBA
	dashes []vg.Length
	marker marker
}

func seriesOf(i int) series {
	return series{inks[i%len(inks)], dashes[(i+i/len(inks))%len(dashes)], marker{shape: (i + 2*(i/len(inks))) % shapes}}
}

func (s series) line(width vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: s.ink, Width: width, Dashes: s.dashes}
}

// pale is a translucent form of the ink, for intervals and truth.
func (s series) pale(alpha uint8) color.NRGBA {
	c := s.ink
	c.A = alpha
	return c
}

// marker draws one of several shapes, filled, or hollow for what is not detected.
type marker struct {
	shape  int
	hollow bool
}

const shapes = 8

// DrawGlyph implements draw.GlyphDrawer.
func (m marker) DrawGlyph(c *draw.Canvas, sty draw.GlyphStyle, at vg.Point) {
	path := m.outline(at, sty.Radius)
	c.SetColor(sty.Color)
	if m.hollow {
		c.SetColor(paper)
	}
	c.Fill(path)
	c.SetLineStyle(draw.LineStyle{Color: sty.Color, Width: hair})
	c.Stroke(path)
}

// outline is the shape around a point, of about the same area for all.
func (m marker) outline(at vg.Point, r vg.Length) vg.Path {
	var p vg.Path
	corner := func(i int, radius vg.Length, angle float64) {
		q := vg.Point{X: at.X + radius*vg.Length(math.Cos(angle)), Y: at.Y + radius*vg.Length(math.Sin(angle))}
		if i == 0 {
			p.Move(q)
		} else {
			p.Line(q)
		}
	}
	polygon := func(n int, radius vg.Length, start float64) {
		for i := range n {
			corner(i, radius, start+2*math.Pi*float64(i)/float64(n))
		}
	}
	cross := func(start float64) {
		for i := range 12 { // the corners of a plus sign with arms as wide as long
			angle := start + math.Pi/2*float64(i/3)
			switch i % 3 {
			case 0:
				corner(i, 1.2*r, angle-math.Atan(1.0/3))
			case 1:
				corner(i, 1.2*r, angle+math.Atan(1.0/3))
			default:
				corner(i, 0.54*r, angle+math.Pi/4)
			}
		}
	}
	switch m.shape {
	case 0:
		p.Move(vg.Point{X: at.X + r, Y: at.Y})
		p.Arc(at, r, 0, 2*math.Pi)
	case 1:
		polygon(4, 1.25*r, math.Pi/4)
	case 2:
		polygon(3, 1.4*r, math.Pi/2)
	case 3:
		polygon(4, 1.3*r, 0)
	case 4:
		polygon(3, 1.4*r, -math.Pi/2)
	case 5:
		cross(0)
	case 6:
		for i := range 10 {
			radius := 1.45 * r
			if i%2 == 1 {
				radius = 0.65 * r
			}
			corner(i, radius, math.Pi/2+math.Pi/5*float64(i))
		}
	default:
		cross(math.Pi / 4)
	}
	p.Close()
	return p
}

// lettering is the text style of a size in points.
func lettering(size vg.Length) text.Style {
	return text.Style{Color: ink, Handler: text.Plain{Fonts: font.DefaultCache},
		Font: font.Font{Typeface: "Liberation", Variant: "Sans", Weight: xfont.WeightNormal, Style: xfont.StyleNormal, Size: size}}
}

// newPlot is an empty plot in the theme. It has no title below: for a logarithmic
// axis plot.Plot keeps room for one as if it stood near the right end.
func newPlot(y string) *plot.Plot {
	p := plot.New()
	p.BackgroundColor = paper
	p.TextHandler = text.Plain{Fonts: font.DefaultCache}
	p.Y.Label.Text = y
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		align := a.Label.TextStyle
		a.Label.TextStyle = lettering(labelSize)
		a.Label.TextStyle.XAlign, a.Label.TextStyle.YAlign, a.Label.TextStyle.Rotation = align.XAlign, align.YAlign, align.Rotation
		align = a.Tick.Label
		a.Tick.Label = lettering(smallSize)
		a.Tick.Label.XAlign, a.Tick.Label.YAlign = align.XAlign, align.YAlign
		a.LineStyle = draw.LineStyle{Color: ink, Width: hair}
		a.Tick.LineStyle = a.LineStyle
		a.Tick.Length = 3
		a.Padding = 2
		a.Label.Padding = 2
	}
	return p
}

// shortened cuts s so that it is no wider than limit.
func shortened(s string, style text.Style, limit vg.Length) string {
	if style.Width(s) <= limit {
		return s
	}
	runes := []rune(s)
	for len(runes) > 1 && style.Width(string(runes)+"…") > limit {
		runes = runes[:len(runes)-1]
	}
	return strings.TrimRight(string(runes), " -") + "…"
}
