package inspect

import (
	"fmt"
	"image/color"
	"io"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Figure is one drawing, for a column of 8.5 cm.
type Figure struct {
	Name string // of the file, without extension
	plot *plot.Plot
}

const (
	figureWidth  = 8.5 * vg.Centimeter
	figureHeight = 6 * vg.Centimeter
	dotsPerInch  = 300
)

// Colours that people with any colour vision tell apart (Wong 2011, Nat. Methods
// 8:441); lines differ in dashes as well.
var (
	colours = []color.RGBA{{0, 114, 178, 255}, {213, 94, 0, 255}, {0, 158, 115, 255}, {204, 121, 167, 255}, {86, 180, 233, 255}, {230, 159, 0, 255}}
	dashes  = [][]vg.Length{nil, {4, 2}, {1.5, 1.5}, {6, 2, 1.5, 2}, {8, 3}, {3, 1}}
)

// Figures draws the interval histogram and the spectra of the streams.
func (doc *Document) Figures() []Figure {
	doc = doc.printable()
	var out []Figure
	if doc.Intervals.Total > 0 {
		out = append(out, Figure{"intervals", doc.drawIntervals()})
	}
	for _, s := range doc.Streams {
		if len(s.Spectrum) > 0 {
			return append(out, Figure{"stream-spectra", doc.drawSpectra()})
		}
	}
	return out
}

// SVG writes the figure with its fonts inside.
func (f Figure) SVG(w io.Writer) error {
	c := vgsvg.NewWith(vgsvg.UseWH(figureWidth, figureHeight), vgsvg.EmbedFonts(true))
	f.draw(c)
	_, err := c.WriteTo(w)
	return err
}

// PNG writes the figure at 300 dots per inch.
func (f Figure) PNG(w io.Writer) error {
	c := vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(figureWidth, figureHeight), vgimg.UseDPI(dotsPerInch))}
	f.draw(c)
	_, err := c.WriteTo(w)
	return err
}

// draw leaves a margin, so that no label is cut off.
func (f Figure) draw(c vg.CanvasSizer) {
	const margin = 1.5 * vg.Millimeter
	f.plot.Draw(draw.Crop(draw.New(c), margin, -margin, margin, -margin))
}

func newPlot(x, y string) *plot.Plot {
	p := plot.New()
	p.X.Label.Text, p.Y.Label.Text = x, y
	for _, style := range []*draw.TextStyle{&p.X.Label.TextStyle, &p.Y.Label.TextStyle, &p.X.Tick.Label, &p.Y.Tick.Label, &p.Legend.TextStyle} {
		style.Font = font.From(font.Font{Typeface: "Liberation", Variant: "Sans"}, 8)
	}
	p.BackgroundColor = color.White
	p.Legend.Top, p.Legend.ThumbnailWidth = true, 16
	return p
}

// drawIntervals is the histogram of log intervals with the threshold.
func (doc *Document) drawIntervals() *plot.Plot {
	p := newPlot("interval between spikes (ms)", "share of intervals (%)")
	bins := doc.Intervals.Bins
	top := 0.0
	for _, b := range bins {
		share := 100 * float64(b.Count) / float64(doc.Intervals.Total)
		top = math.Max(top, share)
		low, high := float64(b.LowMS), float64(b.HighMS)
		bar, err := plotter.NewPolygon(plotter.XYs{{X: low, Y: 0}, {X: low, Y: share}, {X: high, Y: share}, {X: high, Y: 0}})
		if err != nil {
			panic("inspect: " + err.Error()) // bins are finite
		}
		bar.Color = colours[4]
		bar.LineStyle.Color, bar.LineStyle.Width = colours[0], 0.5
		p.Add(bar)
	}
	threshold := doc.Settings.Bursts.MaxISIMS
	line := &plotter.Line{XYs: plotter.XYs{{X: threshold, Y: 0}, {X: threshold, Y: top * 1.1}},
		LineStyle: draw.LineStyle{Color: colours[1], Width: 1, Dashes: dashes[1]}}
	p.Add(line)
	p.Legend.Add(fmt.Sprintf("burst threshold, %g ms", threshold), line)
	p.X.Min = math.Min(float64(bins[0].LowMS), threshold)
	p.X.Max = math.Max(float64(bins[len(bins)-1].HighMS), threshold)
	p.Y.Min, p.Y.Max = 0, top*1.25
	p.X.Scale = plot.LogScale{}
	p.X.Tick.Marker = decades{}
	return p
}

// decades labels powers of ten, and 2 and 5 between them where there are few.
type decades struct{}

func (decades) Ticks(low, high float64) []plot.Tick {
	var out []plot.Tick
	few := math.Log10(high/low) < 3
	for e := math.Floor(math.Log10(low)); e <= math.Ceil(math.Log10(high)); e++ {
		for m := 1.0; m < 10; m++ {
			v := m * math.Pow(10, e)
			if v < low*(1-1e-9) || v > high*(1+1e-9) {
				continue
			}
			t := plot.Tick{Value: v}
			if m == 1 || few && (m == 2 || m == 5) {
				t.Label = fmt.Sprintf("%g", v)
			}
			out = append(out, t)
		}
	}
	return out
}

// drawSpectra is the power density of every stream, each relative to its peak.
func (doc *Document) drawSpectra() *plot.Plot {
	p := newPlot("frequency (Hz)", "power density (dB of the peak)")
	const floor = -60.0
	for i, s := range doc.Streams {
		var xy plotter.XYs
		for _, b := range s.Spectrum {
			db := floor
			if b.DB.Known() {
				db = math.Max(floor, float64(b.DB))
			}
			xy = append(xy, plotter.XY{X: float64(b.LowHz), Y: db}, plotter.XY{X: float64(b.HighHz), Y: db})
		}
		line := &plotter.Line{XYs: xy, LineStyle: draw.LineStyle{Color: colours[i%len(colours)], Width: 1.2, Dashes: dashes[i%len(dashes)]}}
		p.Add(line)
		p.Legend.Add(s.Stream, line)
	}
	p.Y.Min, p.Y.Max = floor, 8
	return p
}
