package sweep

import (
	"fmt"
	"math"

	"codeassay/estimators"
	"codeassay/estimators/discrete"
)

// windowTable is the joint table of stream levels and code levels.
type windowTable = *discrete.Table

// maxLevels bounds the levels that a stream and a code are quantised to.
const maxLevels = 8

// fewestWindows is the number of windows below which nothing can be counted: eight
// samples for each cell of a table of two levels by two.
const fewestWindows = 32

// shifts is the number of circular shifts, over all draws of a size, from which
// the null mean and variance of the plug-in information are measured.
const shifts = 80

// windowPlan is the cutting of spans into disjoint windows of 1/(2 f_c), within
// which the plug-in family counts.
type windowPlan struct {
	band   int
	bins   int   // of a window
	first  []int // by span: index of its first window
	total  int
	levels int
	stream [][]uint8 // stream, window: level of the stream's mean
	rows   []int     // levels in use, by stream
	block  []int     // by window: jackknife block
}

// planWindows cuts windows for every band from zero up, where the study asks for
// the plug-in family.
func (p *plan) planWindows() error {
	used := false
	for _, m := range p.methods {
		used = used || !m.info.Spectral
	}
	if !used {
		return nil
	}
	for b, band := range p.layout.Bands {
		if band.Low > 0 {
			continue
		}
		w := windowPlan{band: b, bins: max(1, int(math.Round(1/(2*band.High)/p.bin)))}
		for _, span := range p.spans {
			w.first = append(w.first, w.total)
			w.total += span.Bins / w.bins
		}
		if w.total < fewestWindows {
			p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Note, About: "plug-in",
				Text: fmt.Sprintf("no plug-in information is given up to %g Hz: %d windows of %.4g s lie within jackknife blocks, fewer than %d",
					band.High, w.total, float64(w.bins)*p.bin, fewestWindows),
				Remedy: "a longer recording, longer segments, or a higher band"})
			continue
		}
		// Eight samples a cell of the joint table: where the jackknife's bias
		// falls to about one per cent.
		w.levels = min(max(int(math.Sqrt(float64(w.total)/8)), 2), maxLevels)
		p.settings.Chosen.PlugInLevels = w.levels
		w.block = make([]int, w.total)
		for j, spans := range p.blocks {
			for _, i := range spans {
				for k := range p.spans[i].Bins / w.bins {
					w.block[w.first[i]+k] = j
				}
			}
		}
		p.windows = append(p.windows, w)
	}
	p.quantiseStreams()
	return nil
}

// quantiseStreams gives every window the level of each stream's mean, after the
// streams' delays are known.
func (p *plan) quantiseStreams() {
	for i := range p.windows {
		w := &p.windows[i]
		w.stream, w.rows = nil, nil
		for s := range p.streams {
			means := make([]float64, w.total)
			for k, span := range p.spans {
				x := shifted(make([]float64, span.Bins), p.streams[s][span.Trial], span.First, p.lags[s])
				for v := range span.Bins / w.bins {
					for _, value := range x[v*w.bins : (v+1)*w.bins] {
						means[w.first[k]+v] += value
					}
				}
			}
			levels, used := quantise(nil, means, w.levels)
			w.stream = append(w.stream, levels)
			w.rows = append(w.rows, used)
		}
	}
}

// window is the plan of band b, nil where it has none.
func (p *plan) window(b int) *windowPlan {
	for i := range p.windows {
		if p.windows[i].band == b {
			return &p.windows[i]
		}
	}
	return nil
}

func quantise(dst []uint8, x []float64, levels int) ([]uint8, int) {
	if dst == nil {
		dst = make([]uint8, len(x))
	}
	used, _ := discrete.Levels(dst, x, levels)
	return dst, used
}
