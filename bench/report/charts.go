package report

import (
	"fmt"
	"slices"
	"strings"

	"codeassay/bench"
)

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
			})
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
		out[i].most = fullScale(out[i].curves)
		if len(out[i].levels) > 0 {
			out[i].legend = append(out[i].legend, entry{name: "chance, " + percent(1-v.confidence(), 3), line: chanceLine})
		}
		if slices.ContainsFunc(out[i].curves, func(c curve) bool { return c.filled }) {
			out[i].legend = append(out[i].legend, entry{name: percent(v.confidence(), 3) + " interval", under: withAlpha(quiet, 0x50)})
		}
	}
	return out
}

// fullScale is where the axis of a coherence ends at least: at 1 for curves that
// come near it, and never so low that noise fills the figure.
func fullScale(curves []curve) float64 {
	for _, c := range curves {
		for _, p := range c.points {
			if p.y.Known() && p.y > 0.7 {
				return 1
			}
		}
	}
	return 0.05
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
// Where each bandwidth has one band, its streams' own, that band goes with it.
func (v *view) inputFigures() []figure {
	var out []figure
	if len(v.inputs) < 2 {
		return nil
	}
	inputs := slices.Clone(v.inputs)
	slices.Sort(inputs)
	done := map[scope]bool{}
	for _, g := range v.of(v.primary, false) {
		own := len(v.bandsOf(g.scope)) == 1
		key := g.scope
		key.input = 0
		where := bandText(g.low, g.high)
		if own {
			key.low, key.high = 0, 0
			where = "from 0 Hz to that bandwidth"
		}
		if done[key] {
			continue
		}
		done[key] = true
		f := figure{name: slug("bits-by-input-bandwidth", g.stream), x: title{before: "Bandwidth of the streams (Hz)"}, y: aboutAxis(g.stream), ticksX: inputs,
			step: 2, about: fmt.Sprintf("Bits per second about %s, %s, of every code of %s, against the bandwidth of the streams.", plain(g.stream), where, counted(int64(g.largest()), "cell"))}
		if !own {
			f.name, f.x.after = slug(f.name, bandText(g.low, g.high)), ", "+bandText(g.low, g.high)
		}
		at := make([]*group, len(inputs))
		for _, like := range v.groups {
			s := like.scope
			s.input = 0
			if own {
				s.low, s.high = 0, 0
			}
			if s == key {
				at[slices.Index(inputs, like.input)] = like
			}
		}
		v.codesAgainst(&f, g.codes(), inputs, true, func(code string, i int) *bench.Row {
			if at[i] == nil {
				return nil
			}
			return at[i].find(code, at[i].largest())
		})
		out = append(out, f)
	}
	return out
}
