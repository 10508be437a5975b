package sweep

import (
	"fmt"
	"math"
	"slices"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/estimators/stationarity"
)

// layDrift cuts spans into stretches, each much longer than the streams'
// correlation times, in which spikes are counted to look for drift.
func (p *plan) layDrift() {
	slowest := math.Inf(1)
	for _, b := range p.settings.Chosen.Bands {
		slowest = math.Min(slowest, b.High)
	}
	p.driftBins = int(math.Ceil(math.Max(1, 5/slowest) / p.bin))
	for _, span := range p.spans {
		p.driftFirst = append(p.driftFirst, p.stretches)
		p.stretches += span.Bins / p.driftBins
	}
}

// noteDrift says when the ensemble's rate changes over the recording.
func (g *engine) noteDrift(counts []float64) {
	change := stationarity.Drift(counts)
	if !(change.PValue < 0.001) {
		return
	}
	low, high := slices.Min(change.Blocks), slices.Max(change.Blocks)
	seconds := float64(g.driftBins) * g.bin
	g.warnings = append(g.warnings, estimators.Warning{Severity: estimators.Weak, About: "rate",
		Text: fmt.Sprintf("the ensemble's rate is not steady: between tenths of the recording it ranges from %.4g to %.4g spikes/s (p = %.2g); a drift adds slow power that no stream explains, and intervals that assume a steady recording are too narrow",
			low/seconds, high/seconds, change.PValue),
		Remedy: "a steady stretch of the recording, or a band that begins above 0 Hz"})
}

// noteDraws says where no interval for new cells is given, and what would bring it.
func (p *plan) noteDraws() {
	l := &p.layout
	for i, n := range l.Sizes {
		if n > 1 && l.CellsMeasured(i) == bench.Unmeasured {
			p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Note, About: "draws",
				Text:   fmt.Sprintf("no interval for new cells is given up to half of all units: the spread between %d draws is too little to tell it", l.Draws),
				Remedy: fmt.Sprintf("[sweep] draws = %d or more", bench.FewestDraws)})
			return
		}
	}
}

// fewestIndependent is the number of independent values of a stream below which
// its warnings and intervals rest on too little: some three for each of thirty
// jackknife blocks.
const fewestIndependent = 100.0

// testValues bounds the values of a stream that are tested.
const testValues = 1 << 14

// testStreams says when a stream is not Gaussian or not steady.
func (p *plan) testStreams() []estimators.Warning {
	var warnings []estimators.Warning
	for s, trials := range p.streams {
		if p.frozen {
			trials = trials[:1]
		}
		// Every sample of a slow stream says little more than its neighbours, and
		// thousands of values are enough to tell their shape: a few to a period of
		// the band's edge, and no more than testValues.
		step := max(1, int(1/(4*p.settings.Chosen.Bands[s].High)/p.bin), int(p.totalS()/p.bin/testValues))
		var x []float64
		for _, trial := range trials {
			for i := 0; i < len(trial); i += step {
				x = append(x, trial[i])
			}
		}
		name := p.layout.Streams[s]
		if shape := stationarity.Gaussianity(x); shape.Visible() {
			warnings = append(warnings, estimators.Warning{Severity: estimators.Weak, About: name,
				Text: fmt.Sprintf("the stream is not Gaussian (skewness %.2f, excess kurtosis %.2f): the coherence rate is then no lower bound on the information about it, only what a linear reader of a Gaussian stream with this spectrum would have",
					shape.Skewness, shape.ExcessKurtosis),
				Remedy: "read the plug-in rows beside it, or drive with a Gaussian stream"})
		}
		if n := stationarity.Independent(x); n < fewestIndependent {
			warnings = append(warnings, estimators.Warning{Severity: estimators.Weak, About: name,
				Text:   fmt.Sprintf("the stream is slow: in %.4g s it takes %.3g independent values, too few to tell whether it is steady or Gaussian, and intervals rest on as few", p.totalS(), n),
				Remedy: fmt.Sprintf("record ≥ %.0f s more", math.Ceil(p.totalS()*(fewestIndependent/n-1)))})
		}
		if change := stationarity.StreamDrift(x); change.PValue < 0.001 {
			warnings = append(warnings, estimators.Warning{Severity: estimators.Weak, About: name,
				Text:   fmt.Sprintf("the stream is not steady: its level changes over the recording (p = %.2g), so one spectrum does not describe it and intervals are too narrow", change.PValue),
				Remedy: "a steady stretch of the recording, or a band that begins above 0 Hz"})
		}
	}
	return warnings
}

// notePower says where frequencies were left out because a stream has next to no
// power there.
func (p *plan) notePower() {
	said := map[[2]int]bool{}
	for row, key := range p.layout.Rows {
		if key.Kind != bench.Single || !p.methods[key.Estimator].info.Spectral || said[[2]int{key.Stream, key.Band}] {
			continue
		}
		said[[2]int{key.Stream, key.Band}] = true
		band, used := p.layout.Bands[key.Band], p.layout.Info[row].UsedHz
		width := band.High - band.Low
		if used > 0.99*width {
			continue
		}
		p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Note, About: p.layout.Streams[key.Stream],
			Text: fmt.Sprintf("%.3g of the %.3g Hz from %.3g to %.3g Hz were left out: the stream has less than 1e-6 of its peak power there, so nothing can be known about it",
				width-used, width, band.Low, band.High),
			Remedy: "nothing, or bands_hz within the stream's own band"})
	}
}

// noteSampling says where the plug-in tables hold too few windows to trust.
func (p *plan) noteSampling() {
	for _, w := range p.windows {
		perCell := float64(w.total) / float64(w.levels*w.levels)
		if perCell >= 8 {
			continue
		}
		severity := estimators.Note
		if perCell < 4 {
			severity = estimators.Weak
		}
		more := (8*float64(w.levels*w.levels) - float64(w.total)) * float64(w.bins) * p.bin
		p.warnings = append(p.warnings, estimators.Warning{Severity: severity, About: "plug-in",
			Text: fmt.Sprintf("%d windows of %.3g ms give %.2g samples a cell of the %d × %d table: too thin for the plug-in information to be trusted",
				w.total, float64(w.bins)*p.bin*1e3, perCell, w.levels, w.levels),
			Remedy: fmt.Sprintf("record ≥ %.0f s more", math.Ceil(more))})
	}
}

// noteCells says that one cell is no ensemble.
func (p *plan) noteCells() {
	if p.layout.Cells == 1 {
		p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Note, About: "cells",
			Text: "the recording has one cell: its numbers say nothing about an ensemble, nor how they vary between cells", Remedy: "more cells, or trials = \"cells\" for repeats of one input"})
	}
}

// noteFrozen says what repeats of one input do to the numbers.
func (p *plan) noteFrozen() {
	if !p.frozen {
		return
	}
	p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Note, About: "trials",
		Text: fmt.Sprintf("%d repeats of one input: the stream is sampled only once, so intervals rest on %d stretches of it, and the further bias that repeats bring was corrected to first order",
			len(p.trialBins()), len(p.blocks)),
		Remedy: "fresh input in each trial, where it can be had"})
}

// noteChance holds the data against the burst-free surrogate: a burst code that
// carries no more about a stream than chance bursts do tells nothing of bursts.
func (g *engine) noteChance(out *bench.Outcome) {
	full := -1
	for i, piece := range out.Pieces {
		if piece.Draw == 0 {
			full = i
		}
	}
	if full < 0 || out.Chance == nil {
		return
	}
	for row, key := range g.layout.Rows {
		if key.Kind != bench.Single || key.Estimator != 0 || !g.methods[0].info.Spectral {
			continue
		}
		code := g.codes.codes[key.Code]
		if code.Linear() && !code.OwnBaseline {
			continue // a plain rate follows the event rate by its nature
		}
		value, chance := out.Pieces[full].Value[0].Full[row], out.Chance.Full[row]
		threshold := 4 * math.Sqrt(g.layout.Info[row].NullVar) / math.Ln2
		if chance < threshold || value < threshold || value > 1.2*chance {
			continue
		}
		out.Warnings = append(out.Warnings, estimators.Warning{Severity: estimators.Weak, About: code.Name,
			Text: fmt.Sprintf("chance bursts of cells without bursts would carry %.3g bits/s about %s by this code; the data carry %.3g: what it says of this stream may be the event rate alone",
				chance, g.layout.Streams[key.Stream], value),
			Remedy: "a shorter max_isi_ms, cells with lower rates, or hold to codes that beat the surrogate"})
	}
}
