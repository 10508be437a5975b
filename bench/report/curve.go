package report

import (
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"codeassay/bench"
)

// point is a value with its interval; what is not Known is left out.
type point struct {
	x                   float64
	y, low, high, truth bench.Number
	undetected          bool
}

// curve draws points of one series in order of x.
type curve struct {
	points  []point
	look    series
	width   vg.Length
	joined  bool      // by a line
	filled  bool      // the interval as a translucent band
	markers bool      // with the interval as a bar
	shift   vg.Length // sideways, so that series do not hide each other
}

// backdrop draws what lies under the lines of all series: known truth, and the
// interval as a band.
type backdrop struct{ curve }

// Plot implements plot.Plotter.
func (c backdrop) Plot(to draw.Canvas, p *plot.Plot) {
	at := c.placed(&to, p)
	c.runs(func(p point) bool { return p.truth.Known() }, func(first, end int) {
		var path vg.Path
		for i := first; i < end; i++ {
			extend(&path, at(i, c.points[i].truth))
		}
		to.SetLineStyle(draw.LineStyle{Color: c.look.pale(0x55), Width: broad})
		to.Stroke(path)
	})
	if !c.filled {
		return
	}
	c.runs(func(p point) bool { return p.low.Known() && p.high.Known() }, func(first, end int) {
		var path vg.Path
		for i := first; i < end; i++ {
			extend(&path, at(i, c.points[i].low))
		}
		for i := end - 1; i >= first; i-- {
			extend(&path, at(i, c.points[i].high))
		}
		path.Close()
		to.SetColor(c.look.pale(0x40))
		to.Fill(path)
	})
}

// placed gives the place on the canvas of a value at the i-th point.
func (c curve) placed(to *draw.Canvas, p *plot.Plot) func(i int, v bench.Number) vg.Point {
	x, y := p.Transforms(to)
	return func(i int, v bench.Number) vg.Point {
		return vg.Point{X: x(c.points[i].x) + c.shift, Y: y(float64(v))}
	}
}

// Plot implements plot.Plotter.
func (c curve) Plot(to draw.Canvas, p *plot.Plot) {
	at := c.placed(&to, p)
	if c.joined {
		c.runs(func(p point) bool { return p.y.Known() }, func(first, end int) {
			var path vg.Path
			for i := first; i < end; i++ {
				extend(&path, at(i, c.points[i].y))
			}
			to.SetLineStyle(c.look.line(c.width))
			to.Stroke(path)
		})
	}
	if !c.markers {
		return
	}
	for i, q := range c.points {
		if !q.y.Known() {
			continue
		}
		if q.low.Known() && q.high.Known() {
			low, high := at(i, q.low), at(i, q.high)
			to.StrokeLine2(draw.LineStyle{Color: c.look.ink, Width: hair}, low.X, low.Y, high.X, high.Y)
		}
		m := c.look.marker
		m.hollow = q.undetected
		to.DrawGlyphNoClip(draw.GlyphStyle{Color: c.look.ink, Radius: markerRadius, Shape: m}, at(i, q.y))
	}
}

// runs calls draw for every stretch of at least two points in a row that hold.
func (c curve) runs(holds func(point) bool, draw func(from, to int)) {
	from := 0
	for i := 0; i <= len(c.points); i++ {
		if i < len(c.points) && holds(c.points[i]) {
			continue
		}
		if i-from >= 2 {
			draw(from, i)
		}
		from = i + 1
	}
}

func extend(p *vg.Path, q vg.Point) {
	if len(*p) == 0 {
		p.Move(q)
	} else {
		p.Line(q)
	}
}

// level is a horizontal line across the plot.
type level struct {
	y    float64
	line draw.LineStyle
}

// Plot implements plot.Plotter.
func (l level) Plot(to draw.Canvas, p *plot.Plot) {
	_, y := p.Transforms(&to)
	to.StrokeLine2(l.line, to.Min.X, y(l.y), to.Max.X, y(l.y))
}

var (
	zeroLine   = draw.LineStyle{Color: quiet, Width: 0.4}
	chanceLine = draw.LineStyle{Color: quiet, Width: line, Dashes: []vg.Length{0.9, 1.5}}
)
