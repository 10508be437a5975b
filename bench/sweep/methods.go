package sweep

import (
	"fmt"
	"math"
	"slices"

	"codeassay/bench"
	"codeassay/decoders/tally"
	"codeassay/estimators"
	"codeassay/estimators/discrete"
	"codeassay/estimators/spectral"
)

// plugIn names the plug-in family and its bias corrections.
var plugIn = map[string]discrete.Method{
	"plug-in":                discrete.Jackknife,
	"plug-in-raw":            discrete.PlugIn,
	"plug-in-miller-madow":   discrete.MillerMadow,
	"plug-in-panzeri-treves": discrete.PanzeriTreves,
}

// EstimatorNames are the estimators that [estimate] with may name.
func EstimatorNames() []string {
	return []string{"multitaper", "welch", "plug-in", "plug-in-raw", "plug-in-miller-madow", "plug-in-panzeri-treves"}
}

// chooseMethods settles segments, tapers, jackknife blocks and windows.
func (p *plan) chooseMethods(part bench.EstimatePart) error {
	nw := part.HalfBandwidth
	if nw == 0 {
		nw = 2
	}
	p.settings.Estimate.HalfBandwidth = nw
	length, err := p.segmentLength(part, nw)
	if err != nil {
		return err
	}
	multitaper := slices.Contains(part.With, "multitaper")
	blocks, weights, err := layBlocks(p.trialBins(), length, p.frozen)
	if err != nil {
		return err
	}
	if len(weights) < spectral.MinSegments {
		need := float64(spectral.MinSegments*length) * p.bin
		p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Weak, About: "segments",
			Text:   fmt.Sprintf("needs ≥ %d segments of %.4g s for an interval to trust; has %d", spectral.MinSegments, float64(length)*p.bin, len(weights)),
			Remedy: fmt.Sprintf("record ≥ %.0f s more, or set a shorter segment_ms", math.Ceil(need-p.usedS(blocks)))})
	}
	p.layBlockSpans(blocks)
	p.layout.BlockWeights = weights
	p.settings.Estimate.SegmentMS = float64(length) * p.bin * 1e3
	p.settings.Chosen.JackknifeBlocks = len(blocks)

	for _, name := range part.With {
		m := method{info: bench.EstimatorInfo{Name: name, Quantity: estimators.CoherenceRate, Spectral: true}}
		switch name {
		case "multitaper":
			m.design, err = spectral.NewMultitaper(length, nw, 0, p.bin, p.topHz())
			if err == nil {
				p.settings.Chosen.Tapers = m.design.Tapers()
			}
		case "welch":
			// One Hann window smears half as far as tapers of NW 2, so half the
			// multitaper segment serves, and a block then holds at least three.
			welch := length
			if multitaper && part.SegmentMS == 0 {
				welch = length / 2
			}
			p.settings.Chosen.WelchSegmentMS = float64(welch) * p.bin * 1e3
			m.design, err = spectral.NewWelch(welch, part.Overlap, part.Window, p.bin, p.topHz())
		default:
			m.info = bench.EstimatorInfo{Name: name, Quantity: estimators.WindowInformation}
			correction := plugIn[name]
			m.estimates = func(t windowTable) float64 { return discrete.Information(t, correction) }
		}
		if err != nil {
			return fmt.Errorf("[estimate] %w", err)
		}
		if m.design != nil {
			for _, span := range p.spans {
				m.tally = m.tally.Add(m.design.Tally(span.Bins))
			}
			m.null = m.design.NullCorrelation(p.spans[0].Bins)
			m.distinct = m.tally.NEff()
			if p.frozen {
				m.distinct /= float64(len(p.trialBins()))
			}
			if need := 3 + len(p.streams); m.tally.NEff() < float64(need) {
				return fmt.Errorf("%s averages %.3g independent estimates, too few for %d streams and a pair of codes: at least %d (a longer recording or a shorter segment_ms)",
					name, m.tally.NEff(), len(p.streams), need)
			}
		}
		p.layout.Estimators = append(p.layout.Estimators, m.info)
		p.methods = append(p.methods, m)
	}
	return p.planWindows()
}

// segmentLength is the study's segment, or the one that DESIGN's rule picks.
func (p *plan) segmentLength(part bench.EstimatePart, nw float64) (int, error) {
	if part.SegmentMS > 0 {
		length := int(math.Round(part.SegmentMS * 1e-3 / p.bin))
		if length < 16 {
			return 0, fmt.Errorf("[estimate] segment_ms = %g: at least %g (16 bins)", part.SegmentMS, 16*p.bin*1e3)
		}
		if smear := spectral.SmearPerSD(nw/(float64(length)*p.bin), p.topHz(), p.totalS()); smear > 1 && slices.Contains(part.With, "multitaper") {
			p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Weak, About: "segment_ms",
				Text:   fmt.Sprintf("segments of %g ms smear the band's edge: up to %.2g standard errors of the information are lost", part.SegmentMS, smear),
				Remedy: "a longer segment_ms, or 0 to have it chosen"})
		}
		return length, nil
	}
	stretches := p.trialBins()
	if p.frozen {
		stretches = stretches[:1]
	}
	length, warnings := spectral.ChooseLength(stretches, p.bin, p.topHz(), nw)
	if length == 0 {
		return 0, fmt.Errorf("the recording of %.4g s is too short for spectra: at least 2 segments of 16 bins of %g ms", p.totalS(), p.bin*1e3)
	}
	p.warnings = append(p.warnings, warnings...)
	return length, nil
}

// totalS is the recording's length in whole bins, in s.
func (p *plan) totalS() float64 {
	bins := 0
	for _, n := range p.trialBins() {
		bins += n
	}
	return float64(bins) * p.bin
}

// usedS is the time that blocks cover, in s.
func (p *plan) usedS(blocks [][]tally.Span) float64 {
	bins := 0
	for _, spans := range blocks {
		for _, s := range spans {
			bins += s.Bins
		}
	}
	return float64(bins) * p.bin
}

// layBlockSpans orders all spans in time and remembers whose they are.
func (p *plan) layBlockSpans(blocks [][]tally.Span) {
	for _, spans := range blocks {
		p.spans = append(p.spans, spans...)
	}
	slices.SortFunc(p.spans, func(a, b tally.Span) int {
		if a.Trial != b.Trial {
			return a.Trial - b.Trial
		}
		return a.First - b.First
	})
	at := make(map[tally.Span]int, len(p.spans))
	for i, s := range p.spans {
		at[s] = i
	}
	for _, spans := range blocks {
		var ids []int
		for _, s := range spans {
			ids = append(ids, at[s])
		}
		p.blocks = append(p.blocks, ids)
	}
}
