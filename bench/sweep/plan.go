package sweep

import (
	"fmt"
	"math"
	"slices"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/decoders/tally"
	"codeassay/estimators"
	"codeassay/estimators/spectral"
	"codeassay/scenarios"
)

// method is one estimator of a plan: a spectral design, or windows.
type method struct {
	info      bench.EstimatorInfo
	design    *spectral.Design // nil for the plug-in family
	estimates func(t windowTable) float64
	null      []float64 // correlation of neighbouring cells under independence
	tally     spectral.Tally
	distinct  float64 // independent estimates of distinct input, fewer than NEff with frozen repeats
}

// plan is everything that is settled before spikes are read. It is read-only
// once built, and shared by all workers.
type plan struct {
	layout   bench.Layout
	settings bench.Settings
	warnings []estimators.Warning

	src     bench.Source
	binNs   int64
	bin     float64 // s
	rules   []decoders.BurstRule
	streams [][][]float64 // stream, trial, bin; means removed
	lags    []int         // bins by which each stream is delayed to meet the codes
	frozen  bool

	blocks  [][]int // spans of each jackknife block
	spans   []tally.Span
	methods []method
	codes   codeBasis
	halo    int

	windows []windowPlan // one a band that the plug-in family uses

	driftBins  int   // of a stretch in which spikes are counted to look for drift
	driftFirst []int // by span: index of its first stretch
	stretches  int
	masks      [][][]bool // method, stream, bin: enough power to be used

	rowCells []rowCells // by row of the layout; empty for windows
}

// newPlan settles a sweep. visible codes are shown; the plan may add the spike
// and event rate, which pairs are held against.
func newPlan(study bench.Study, visible []decoders.Code, pairs [][2]int, src bench.Source) (*plan, error) {
	p := &plan{src: src, frozen: src.Meaning() == scenarios.FrozenRepeats}
	p.binNs = int64(math.Round(study.Sweep.BinMS * 1e6))
	p.bin = float64(p.binNs) * 1e-9
	p.layout = bench.Layout{
		Cells: len(src.Units()), Codes: visible, Pairs: pairs,
		Confidence: study.Estimate.Confidence, Draws: study.Sweep.Draws,
	}
	p.settings = bench.Settings{Bursts: study.Bursts, Sweep: study.Sweep, Codes: study.Codes, Estimate: study.Estimate}
	if p.settings.Codes == nil {
		p.settings.Codes = []bench.CodePart{}
	}
	var err error
	if p.rules, err = study.Bursts.UnitRules(src.Units()); err != nil {
		return nil, err
	}
	if p.layout.Sizes, err = sizes(study.Sweep.Cells, p.layout.Cells); err != nil {
		return nil, err
	}
	p.settings.Sweep.Cells = p.layout.Sizes
	if err := p.readStreams(); err != nil {
		return nil, err
	}
	if err := p.chooseBands(study); err != nil {
		return nil, err
	}
	if err := p.chooseMethods(study.Estimate); err != nil {
		return nil, err
	}
	if err := p.chooseWindow(study); err != nil {
		return nil, err
	}
	if p.codes, err = newCodeBasis(visible, pairs, p.halo, study.Sweep.FractionPrior); err != nil {
		return nil, err
	}
	p.layRows()
	p.layDrift()
	p.noteCells()
	p.noteDraws()
	p.notePower()
	p.noteSampling()
	p.noteFrozen()
	return p, nil
}

// sizes are the ensemble sizes asked for, rising and without repeats; by default
// 1, 2, 4, … and all units.
func sizes(asked []int, units int) ([]int, error) {
	if len(asked) == 0 {
		for n := 1; n < units; n *= 2 {
			asked = append(asked, n)
		}
		asked = append(asked, units)
	}
	out := slices.Clone(asked)
	slices.Sort(out)
	out = slices.Compact(out)
	if out[0] < 1 || out[len(out)-1] > units {
		return nil, fmt.Errorf("[sweep] cells = %v: sizes from 1 to the recording's %d units", asked, units)
	}
	return out, nil
}

// readStreams brings every stream onto bins and removes its mean.
func (p *plan) readStreams() error {
	for s, stream := range p.src.Streams() {
		p.layout.Streams = append(p.layout.Streams, stream.Name)
		var trials [][]float64
		for r, trial := range p.src.Trials() {
			bins := int(trial.Duration / p.binNs)
			if bins == 0 {
				return fmt.Errorf("trial %d lasts %.4g s, less than a bin of %g ms: a smaller [sweep] bin_ms", r+1, float64(trial.Duration)*1e-9, p.bin*1e3)
			}
			if p.frozen && r > 0 && bins == len(trials[0]) {
				trials = append(trials, trials[0])
				continue
			}
			trials = append(trials, onBins(p.src.StreamSamples(s, r), p.src.Dt(), p.bin, bins))
		}
		once := trials
		if p.frozen {
			once = trials[:1]
		}
		removeMean(once)
		p.streams = append(p.streams, trials)
	}
	p.lags = make([]int, len(p.streams))
	return nil
}

// trialBins is the number of bins of every trial.
func (p *plan) trialBins() []int {
	bins := make([]int, len(p.streams[0]))
	for r := range bins {
		bins[r] = len(p.streams[0][r])
	}
	return bins
}

// chooseBands takes the study's bands for every stream, or gives each stream its
// own: the scenario's cut-off where it states one, else the estimated edge.
func (p *plan) chooseBands(study bench.Study) error {
	nyquist := 0.5 / math.Max(p.bin, p.src.Dt())
	all := make([]bool, len(p.streams))
	for s := range all {
		all[s] = true
	}
	for _, b := range study.Sweep.BandsHz {
		if b.High > nyquist*(1+1e-9) {
			return fmt.Errorf("[sweep] bands_hz: %g Hz is above what bins of %g ms and stream samples of %g ms carry: at most %g Hz", b.High, p.bin*1e3, p.src.Dt()*1e3, nyquist)
		}
		p.layout.Bands = append(p.layout.Bands, bench.SweepBand{Band: b, Streams: all})
	}
	for s, stream := range p.src.Streams() {
		edge := stream.BandHz
		if len(study.Sweep.BandsHz) > 0 {
			edge = p.topHz() // the study's bands stand for every stream's own
		}
		if edge == 0 {
			stretches := p.streams[s]
			if p.frozen {
				stretches = stretches[:1]
			}
			var err error
			if edge, err = spectral.OwnBand(stretches, p.bin); err != nil {
				return fmt.Errorf("stream %s: %w", stream.Name, err)
			}
			if edge == 0 {
				return fmt.Errorf("stream %s is constant: it carries nothing to inform about", stream.Name)
			}
			// Three digits are all that an estimated edge is worth.
			edge = math.Min(roundTo(edge, 3), nyquist)
		}
		band := bench.Band{High: math.Min(edge, nyquist)}
		p.settings.Chosen.Bands = append(p.settings.Chosen.Bands, bench.StreamBand{Stream: stream.Name, Band: band})
		if len(study.Sweep.BandsHz) > 0 {
			continue
		}
		known := slices.IndexFunc(p.layout.Bands, func(b bench.SweepBand) bool { return b.Band == band })
		if known < 0 {
			p.layout.Bands = append(p.layout.Bands, bench.SweepBand{Band: band, Streams: make([]bool, len(p.streams))})
			known = len(p.layout.Bands) - 1
		}
		p.layout.Bands[known].Streams[s] = true
	}
	p.settings.Sweep.BandsHz = nil
	for _, b := range p.layout.Bands {
		p.settings.Sweep.BandsHz = append(p.settings.Sweep.BandsHz, b.Band)
	}
	return nil
}

// topHz is the highest frequency of any band.
func (p *plan) topHz() float64 {
	top := 0.0
	for _, b := range p.layout.Bands {
		top = math.Max(top, b.High)
	}
	return top
}

// longestWindow bounds the sliding window, in bins: sums over it must be exact.
const longestWindow = 1<<15 - 1

// chooseWindow settles the sliding window of ratio codes: at most 1/(4 f_c),
// since a boxcar of length T has its first null at 1/T, and at most an eighth of
// a block's shortest stretch.
func (p *plan) chooseWindow(study bench.Study) error {
	ms := study.Sweep.FractionWindowMS
	p.halo = max(1, int(math.Round(ms*1e-3/p.bin)))
	if p.halo > longestWindow {
		return fmt.Errorf("[sweep] fraction_window_ms = %g: at most %.6g (%d bins)", ms, longestWindow*p.bin*1e3, longestWindow)
	}
	if ms == 0 {
		shortest := longestWindow * 8
		for _, s := range p.spans {
			shortest = min(shortest, s.Bins)
		}
		p.halo = max(1, min(int(math.Floor(1/(4*p.topHz())/p.bin+1e-9)), shortest/8))
	}
	p.settings.Sweep.FractionWindowMS = float64(p.halo) * p.bin * 1e3
	if limit := 1 / (4 * p.topHz()); float64(p.halo)*p.bin > 1.5*limit {
		p.warnings = append(p.warnings, estimators.Warning{Severity: estimators.Note, About: "fraction_window_ms",
			Text: fmt.Sprintf("the sliding window of %g ms is long for a band of %g Hz: a boxcar has its first null at %.3g Hz",
				p.settings.Sweep.FractionWindowMS, p.topHz(), 1/(float64(p.halo)*p.bin)),
			Remedy: fmt.Sprintf("at most %.3g ms, or 0 to have it chosen", limit*1e3)})
	}
	return nil
}

func roundTo(x float64, digits int) float64 {
	if x == 0 {
		return 0
	}
	scale := math.Pow(10, float64(digits-1)-math.Floor(math.Log10(math.Abs(x))))
	return math.Round(x*scale) / scale
}
