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
	least  float64   // of the y axis, at most
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

// spectra are the coherence spectra, a figure a stream.
func (v *view) spectra() []figure {
	order := v.codeOrder()
	var out []figure
	at := map[scope]int{}
	estimator := v.spectralEstimator()
	for i := range v.doc.Spectra {
		sp := &v.doc.Spectra[i]
		if sp.Estimator != estimator {
			continue
		}
		s := scope{stream: sp.Stream, input: orZero(sp.InputBandwidthHz)}
		if _, ok := at[s]; !ok {
			at[s] = len(out)
			name, note := "", ""
			if len(v.inputs) > 1 {
				name = "-in-" + trimmed(sp.InputBandwidthHz, 4) + "-hz"
				note = " of " + trimmed(sp.InputBandwidthHz, 4) + " Hz"
			}
			out = append(out, figure{name: slug("coherence", sp.Stream+name), x: title{before: "Frequency (Hz)"}, y: title{"Squared coherence with ", plain(sp.Stream), note, "Coherence² with "},
				about: fmt.Sprintf("Magnitude-squared coherence of every code of %s with the stream %s%s, against frequency.", counted(int64(sp.Cells), "cell"), plain(sp.Stream), note),
				least: 0, most: 0.05})
		}
		f := &out[at[s]]
		look := seriesOf(slices.Index(order, sp.Code))
		c := curve{look: look, width: line, joined: true, filled: v.among(sp, 2)}
		for k := range sp.FreqHz {
			p := point{x: float64(sp.FreqHz[k]), y: sp.Coherence[k], low: bench.None, high: bench.None, truth: bench.None}
			if k < len(sp.CILow) && k < len(sp.CIHigh) {
				p.low, p.high = sp.CILow[k], sp.CIHigh[k]
			}
			c.points = append(c.points, p)
		}
		f.curves = append(f.curves, c)
		e := entry{name: plain(sp.Code), line: look.line(line)}
		if c.filled {
			e.under = look.pale(0x40)
		}
		f.legend = append(f.legend, e)
		if sp.Threshold.Known() && len(f.levels) == 0 {
			f.levels = append(f.levels, level{float64(sp.Threshold), chanceLine})
		}
	}
	for i := range out {
		if len(out[i].levels) > 0 {
			out[i].legend = append(out[i].legend, entry{name: "chance, " + percent(1-v.confidence(), 3), line: chanceLine})
		}
		if slices.ContainsFunc(out[i].curves, func(c curve) bool { return c.filled }) {
			out[i].legend = append(out[i].legend, entry{name: percent(v.confidence(), 3) + " interval", under: withAlpha(quiet, 0x50)})
		}
	}
	return out
}

// spectralEstimator is the primary, or the first that has spectra.
func (v *view) spectralEstimator() string {
	for _, s := range v.doc.Spectra {
		if s.Estimator == v.primary {
			return v.primary
		}
	}
	if len(v.doc.Spectra) > 0 {
		return v.doc.Spectra[0].Estimator
	}
	return ""
}

// among reports whether a spectrum's code is one of the best few about its stream.
func (v *view) among(sp *bench.Spectrum, few int) bool {
	for _, g := range v.of(v.primary, false) {
		if g.stream != sp.Stream || g.input != orZero(sp.InputBandwidthHz) {
			continue
		}
		for _, r := range g.at(g.largest()) {
			if r.Code == sp.Code {
				return r.Rank != nil && *r.Rank <= few
			}
		}
	}
	return false
}

// pointOf is a row as a point.
func pointOf(x float64, r *bench.Row) point {
	if r == nil {
		return point{x: x, y: bench.None, low: bench.None, high: bench.None, truth: bench.None}
	}
	return point{x: x, y: r.BitsPerS, low: r.CILow, high: r.CIHigh, truth: r.TruthBitsPerS, undetected: !r.Detected}
}

// codesAgainst fills a figure with a curve a code, whose points are the rows that
// row gives for the places xs.
func (v *view) codesAgainst(f *figure, codes []string, xs []float64, joined bool, row func(code string, i int) *bench.Row) {
	var known, hollow bool
	for i, code := range v.codeOrder() {
		if !slices.Contains(codes, code) {
			continue
		}
		c := curve{look: seriesOf(i), width: line, joined: joined, markers: true}
		for k, x := range xs {
			p := pointOf(x, row(code, k))
			known = known || p.truth.Known()
			hollow = hollow || p.undetected
			c.points = append(c.points, p)
		}
		f.curves = append(f.curves, c)
		e := entry{name: plain(code), marker: c.look.marker, ink: c.look.ink}
		if joined {
			e.line = c.look.line(line)
		}
		f.legend = append(f.legend, e)
	}
	if known {
		f.legend = append(f.legend, entry{name: "known truth", under: withAlpha(quiet, 0x70)})
	}
	if hollow {
		f.legend = append(f.legend, entry{name: "not detected", marker: marker{hollow: true}, ink: quiet})
	}
	f.spread(xs)
}

// sizeFigures are bits/s against ensemble size, a figure a scope.
func (v *view) sizeFigures() []figure {
	var out []figure
	for _, g := range v.of(v.primary, false) {
		sizes := g.sizes()
		if len(sizes) < 2 {
			continue
		}
		f := figure{name: slug("bits-by-size", g.stream+v.label(g.scope)), x: title{before: "Ensemble size (cells)" + v.axisNote(g.scope)}, y: aboutAxis(g.stream), ticksX: floats(sizes),
			step: 2, about: fmt.Sprintf("Bits per second about %s, %s, of every code against ensemble size.", plain(g.stream), g.where())}
		v.codesAgainst(&f, g.codes(), f.ticksX, true, func(code string, i int) *bench.Row { return g.find(code, sizes[i]) })
		out = append(out, f)
	}
	return out
}

func aboutAxis(streams ...string) title {
	return title{"Information about ", listed(plainAll(streams)), " (bits/s)", "About "}
}

// pairFigures are the pairs against ensemble size, beside what they are held
// against.
func (v *view) pairFigures() []figure {
	var out []figure
	for _, rows := range v.pairGroups() {
		first := rows[0]
		rows = slices.Clone(rows)
		slices.SortStableFunc(rows, func(a, b *bench.JointRow) int { return a.Cells - b.Cells })
		if len(rows) < 2 {
			continue
		}
		s := scope{input: orZero(first.InputBandwidthHz), low: orZero(first.BandLowHz), high: orZero(first.BandHz)}
		note, label := v.pairNote(s)
		f := figure{name: slug("bits-by-size", strings.Join(first.Codes, "-with-")+label), x: title{before: "Ensemble size (cells)" + note}, y: aboutAxis(first.Streams...),
			about: fmt.Sprintf("Bits per second of %s together about %s together, %s, against ensemble size, beside the spike rate and a split population.",
				listed(plainAll(first.Codes)), listed(plainAll(first.Streams)), s.where())}
		var xs []float64
		curves := [3]curve{}
		for i := range curves {
			curves[i] = curve{look: seriesOf(i), width: line, joined: true, markers: true}
		}
		var known [3]bool
		for _, r := range rows {
			x := float64(r.Cells)
			xs = append(xs, x)
			pair := point{x: x, y: r.BitsPerS, low: r.CILow, high: r.CIHigh, truth: r.TruthBitsPerS, undetected: !r.Detected}
			spikes, split := pointOf(x, nil), pointOf(x, nil)
			spikes.y, split.y = r.SpikeRateBitsPerS, r.SplitBitsPerS
			for i, p := range []point{pair, spikes, split} {
				known[i] = known[i] || p.y.Known()
				curves[i].points = append(curves[i].points, p)
			}
		}
		for i, name := range []string{strings.Join(plainAll(first.Codes), " + "), "spike rate", "split population"} {
			if known[i] {
				f.curves = append(f.curves, curves[i])
				f.legend = append(f.legend, entry{name: name, line: curves[i].look.line(line), marker: curves[i].look.marker, ink: curves[i].look.ink})
			}
		}
		if slices.ContainsFunc(rows, func(r *bench.JointRow) bool { return !r.Detected }) {
			f.legend = append(f.legend, entry{name: "not detected", marker: marker{hollow: true}, ink: quiet})
		}
		f.ticksX = xs
		out = append(out, f)
	}
	return out
}

// bandFigures are bits/s against band at the largest size, where a stream has
// several.
func (v *view) bandFigures() []figure {
	var out []figure
	done := map[scope]bool{}
	for _, g := range v.of(v.primary, false) {
		all := v.bandsOf(g.scope)
		key := g.scope
		key.low, key.high = 0, 0
		if len(all) < 2 || done[key] {
			continue
		}
		done[key] = true
		f := figure{name: slug("bits-by-band", g.stream), x: title{before: "Band (Hz)"}, y: aboutAxis(g.stream),
			step:  6,
			about: fmt.Sprintf("Bits per second about %s of every code of %s, by band.", plain(g.stream), counted(int64(g.largest()), "cell"))}
		if len(v.inputs) > 1 {
			in := trimmed(bench.Number(g.input), 4)
			f.name, f.x.after = slug(f.name, "in", in, "hz"), ", streams of "+in+" Hz"
		}
		var places []float64
		var codes []string
		for i, b := range all {
			f.names = append(f.names, strings.TrimSuffix(bandText(b.low, b.high), " Hz"))
			places = append(places, float64(i))
			codes = append(codes, b.codes()...)
		}
		v.codesAgainst(&f, codes, places, false, func(code string, i int) *bench.Row { return all[i].find(code, all[i].largest()) })
		out = append(out, f)
	}
	return out
}

// inputFigures are bits/s against the streams' bandwidth at the largest size.
func (v *view) inputFigures() []figure {
	var out []figure
	if len(v.inputs) < 2 {
		return nil
	}
	done := map[scope]bool{}
	for _, g := range v.of(v.primary, false) {
		key := g.scope
		key.input = 0
		if done[key] {
			continue
		}
		done[key] = true
		inputs := slices.Clone(v.inputs)
		slices.Sort(inputs)
		f := figure{name: slug("bits-by-input-bandwidth", g.stream), x: title{before: "Bandwidth of the streams (Hz)"}, y: aboutAxis(g.stream), ticksX: inputs,
			step: 2, about: fmt.Sprintf("Bits per second about %s, %s, of every code of %s, against the bandwidth of the streams.", plain(g.stream), bandText(g.low, g.high), counted(int64(g.largest()), "cell"))}
		if len(v.bandsOf(g.scope)) > 1 {
			f.name, f.x.after = slug(f.name, bandText(g.low, g.high)), ", "+bandText(g.low, g.high)
		}
		v.codesAgainst(&f, g.codes(), inputs, true, func(code string, i int) *bench.Row {
			s := key
			s.input = inputs[i]
			if like := v.like(s); like != nil {
				return like.find(code, like.largest())
			}
			return nil
		})
		out = append(out, f)
	}
	return out
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
	y := ranged{math.Min(0, f.least), f.most}
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
