package report

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"unicode"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"

	"codeassay/bench"
)

// figure is one figure before it is drawn.
type figure struct {
	name   string // of its files, without ending
	about  string // for who cannot see it
	x, y   title
	curves []curve
	legend []entry
	levels []level
	ticksX []float64 // logarithmic axis with ticks at these, if any
	names  []string  // names of the places 0, 1, … on the axis, if any
	step   vg.Length // from marker to marker at one place, at most
	most   float64   // of the y axis, at least
}

// title is that of an axis. Where there is not enough room its brief beginning is
// taken, then a name from the user is shortened; the unit never is.
type title struct{ before, name, after, brief string }

func (t title) fitted(width vg.Length) string {
	style := lettering(labelSize)
	if t.brief != "" && style.Width(t.before+t.name+t.after) > width {
		t.before = t.brief
	}
	return t.before + shortened(t.name, style, width-style.Width(t.before+t.after)) + t.after
}

// Figures draws doc into dir, which is made if need be, each figure as SVG with
// its font and as PNG of 300 dots an inch, one journal column (85 mm) wide: the
// coherence spectra of every stream, bits/s against ensemble size for every
// stream and pair, and, where there are several, against band and against input
// bandwidth. It returns the paths of the files, in order. A file appears by
// rename, whole or not at all.
func Figures(dir string, doc *bench.Document) ([]string, error) {
	return save(dir, newView(doc).figures())
}

func (v *view) figures() []figure {
	out := v.spectra()
	out = append(out, v.sizeFigures()...)
	out = append(out, v.pairFigures()...)
	out = append(out, v.bandFigures()...)
	out = append(out, v.inputFigures()...)
	taken := map[string]bool{}
	for i := range out {
		base := out[i].name
		for n := 2; taken[out[i].name]; n++ {
			out[i].name = fmt.Sprintf("%s-%d", base, n)
		}
		taken[out[i].name] = true
	}
	return out
}

// slug makes a file name of parts: letters, digits and hyphens.
func slug(parts ...string) string {
	words := strings.FieldsFunc(strings.ToLower(strings.Join(parts, "-")), func(r rune) bool {
		return r > unicode.MaxASCII || !unicode.IsLetter(r) && !unicode.IsDigit(r)
	})
	name := strings.Join(words, "-")
	return name[:min(len(name), 100)]
}

// label is the part of a file name that tells scopes apart, where there are several.
func (v *view) label(s scope) string {
	out := ""
	if len(v.bandsOf(s)) > 1 {
		out += "-" + bandText(s.low, s.high)
	}
	if len(v.inputs) > 1 {
		out += "-in-" + trimmed(bench.Number(s.input), 4) + "-hz"
	}
	return out
}

// bandsOf are the groups that differ from s in the band alone.
func (v *view) bandsOf(s scope) []*group {
	var out []*group
	for _, g := range v.groups {
		like := g.scope
		like.low, like.high = s.low, s.high
		if like == s {
			out = append(out, g)
		}
	}
	return out
}

// codeOrder gives every code its place, and so its look, in all figures alike.
func (v *view) codeOrder() []string {
	codes := slices.Clone(v.doc.Settings.Sweep.Codes)
	add := func(code string) {
		if !slices.Contains(codes, code) {
			codes = append(codes, code)
		}
	}
	for _, r := range v.doc.Rows {
		add(r.Code)
	}
	for _, s := range v.doc.Spectra {
		add(s.Code)
	}
	return codes
}

// axisNote names band and input bandwidth on an axis where one figure of
// several would not tell itself from the others.
func (v *view) axisNote(s scope) string {
	if len(v.bandsOf(s)) > 1 || len(v.inputs) > 1 {
		return ", " + s.where()
	}
	return ""
}

// spread shifts curves sideways, at most over half the distance of places, so
// that markers at one place do not hide each other.
func (f *figure) spread(xs []float64) {
	n := len(f.curves)
	if n < 2 || len(xs) < 2 {
		return
	}
	step := min(plotWidth/vg.Length(len(xs))/2/vg.Length(n-1), f.step)
	for i := range f.curves {
		f.curves[i].shift = step * (vg.Length(i) - vg.Length(n-1)/2)
	}
}

// plotWidth and plotTall are about what axis titles and tick labels leave of the
// figure.
const (
	plotWidth = figureWidth - 36
	plotTall  = plotHeight - 26
)

func floats(of []int) []float64 {
	out := make([]float64, len(of))
	for i, n := range of {
		out[i] = float64(n)
	}
	return out
}

// build makes the plot of a figure.
func (f *figure) build() *plot.Plot {
	p := newPlot(f.y.fitted(plotTall))
	y := ranged{0, f.most}
	x := ranged{math.Inf(1), math.Inf(-1)}
	for _, c := range f.curves {
		for _, q := range c.points {
			y.hold(q.y)
			y.hold(q.truth)
			if c.markers || c.filled {
				y.hold(q.low)
				y.hold(q.high)
			}
			x.hold(bench.Number(q.x))
		}
	}
	for _, l := range f.levels {
		y.hold(bench.Number(l.y))
	}
	margin := 0.04 * (y.high - y.low)
	if y.high > y.low {
		y.high += margin
	} else {
		y.high = y.low + 1
	}
	if y.low < 0 {
		y.low -= margin
	}
	p.Y.Min, p.Y.Max, p.Y.Tick.Marker = y.low, y.high, rounded{}
	p.X.Min, p.X.Max, p.X.Tick.Marker = x.low, x.high, rounded{}
	switch {
	case len(f.ticksX) > 0:
		room := math.Pow(x.high/x.low, f.side())
		p.X.Min, p.X.Max = x.low/room, x.high*room
		p.X.Scale = plot.LogScale{}
		p.X.Tick.Marker = logTicks(f.ticksX, p.X.Min, p.X.Max, plotWidth)
	case len(f.names) > 0:
		p.X.Min, p.X.Max = x.low-0.5, x.high+0.5
		var ticks given
		for i, n := range f.names {
			ticks = append(ticks, plot.Tick{Value: float64(i), Label: n})
		}
		p.X.Tick.Marker = ticks
	case !(x.high > x.low):
		p.X.Min, p.X.Max = 0, 1
	}
	if y.low < 0 {
		p.Add(level{0, zeroLine})
	}
	for _, c := range f.curves {
		p.Add(backdrop{c})
	}
	for i := range f.curves {
		p.Add(f.curves[len(f.curves)-1-i]) // the first on top
	}
	for _, l := range f.levels {
		p.Add(l)
	}
	return p
}

// side is the room that markers need on either side of their places, as a share
// of the distance of the outermost places.
func (f *figure) side() float64 {
	need := 2 * markerRadius
	for _, c := range f.curves {
		need = max(need, c.shift+2*markerRadius)
	}
	return float64(need / (plotWidth - 2*need))
}
