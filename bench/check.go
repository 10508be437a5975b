package bench

import (
	"fmt"
	"math"
	"strings"

	"codeassay/decoders"
	"codeassay/scenarios"
)

// Bounds that only a slip of the pen leaves.
const (
	mostDraws = 100000
	mostCells = 10000000
	longestS  = 1e7
	longestMS = 1e9
)

// Check holds every value of a study against its range. Names of codes,
// estimators and scenarios are checked by the catalogue. An error is a *Fault.
func (s *Study) Check() error {
	c := checker{study: s}
	c.recording()
	c.bursts()
	c.sweep()
	c.userCodes()
	c.estimate()
	if c.fault != nil {
		return c.fault
	}
	return nil
}

// checker keeps the first fault.
type checker struct {
	study *Study
	fault *Fault
}

// need blames a key with a value unless ok.
func (c *checker) need(ok bool, path string, value any, format string, args ...any) {
	if !ok {
		c.refuse(path, "%s = %s: %s", c.place(path), showValue(value), fmt.Sprintf(format, args...))
	}
}

func (c *checker) refuse(path, format string, args ...any) {
	if c.fault == nil {
		c.fault = c.study.Fault(path, format, args...)
	}
}

func (c *checker) place(path string) string {
	parts := strings.Split(path, ".")
	if len(parts) == 1 {
		return place("", parts[0])
	}
	return place(parts[0], parts[len(parts)-1])
}

func showValue(v any) string {
	switch v := v.(type) {
	case string:
		return fmt.Sprintf("%q", v)
	case float64:
		return fmt.Sprintf("%v", v)
	case Band:
		return fmt.Sprintf("[%v, %v]", v.Low, v.High)
	}
	return fmt.Sprint(v)
}

// Keys of [recording] that only one kind of recording has.
var (
	scenarioKeys = []string{"cells", "event_rate_hz", "event_depth", "burst_share", "burst_depth", "bandwidths_hz"}
	fileKeys     = []string{"spikes", "streams", "units_table", "units", "trials", "drop_outside"}
)

func (c *checker) recording() {
	s, r := c.study, &c.study.Recording
	given := func(keys []string) string {
		for _, k := range keys {
			if s.Given("recording." + k) {
				return k
			}
		}
		return ""
	}
	switch {
	case r.Scenario != "":
		if key := given(fileKeys); key != "" {
			c.refuse("recording."+key, "[recording] %s is a key of files, but scenario = %q is given: keep one of the two", key, r.Scenario)
		}
		c.need(r.Cells >= 1 && r.Cells <= mostCells, "recording.cells", r.Cells, "from 1 to %d", mostCells)
	case r.Spikes == "":
		if key := given(scenarioKeys); key != "" {
			c.refuse("recording."+key, `[recording] %s is a key of scenarios: add scenario = "paired-drive"`, key)
		}
		c.refuse("recording", `[recording] names no recording: give spikes and streams, or scenario = "paired-drive"`)
	default:
		if key := given(scenarioKeys); key != "" {
			remedy := "leave it out"
			if key == "cells" {
				remedy = "units declares how many were recorded, and [sweep] cells the ensemble sizes"
			}
			c.refuse("recording."+key, "[recording] %s is a key of scenarios, but spikes names a file: %s", key, remedy)
		}
		c.need(r.Streams != "" || strings.HasSuffix(strings.ToLower(r.Spikes), ".npz"), "recording.spikes", r.Spikes,
			"streams has to name a file beside it (only an .npz holds both)")
		c.need(r.Units >= 0 && r.Units <= mostCells, "recording.units", r.Units, "from 0 (those that spike) to %d", mostCells)
		meanings := []string{string(scenarios.Segments), string(scenarios.TrialsAsCells), string(scenarios.FrozenRepeats)}
		switch scenarios.TrialMeaning(r.Trials) {
		case "", scenarios.Segments, scenarios.TrialsAsCells, scenarios.FrozenRepeats:
		default:
			c.refuse("recording.trials", "[recording] trials = %q: unknown meaning%s", r.Trials, suggest(r.Trials, meanings, func(m string) string { return m }))
		}
	}
	c.need(r.DurationS > 0 && r.DurationS <= longestS || r.DurationS == 0 && !s.Given("recording.duration_s"), "recording.duration_s", r.DurationS,
		"seconds above 0, up to %g", longestS)
	c.need(r.EventRateHz >= 0 && r.EventRateHz < 1000, "recording.event_rate_hz", r.EventRateHz, "events/s above 0, below 1000")
	share := func(key string, v float64) {
		c.need(v >= 0 && v < 1, "recording."+key, v, "from 0 to below 1")
	}
	share("event_depth", r.EventDepth)
	share("burst_share", r.BurstShare)
	share("burst_depth", r.BurstDepth)
	for _, hz := range r.BandwidthsHz {
		c.need(hz > 0, "recording.bandwidths_hz", hz, "cut-offs are above 0 Hz")
	}
}

func (c *checker) bursts() {
	b := c.study.Bursts
	ms := func(key string, v float64) int64 {
		c.need(v >= 0 && v <= longestMS, "bursts."+key, v, "milliseconds from 0 to %g", float64(longestMS))
		return int64(math.Round(v * 1e6))
	}
	rule := decoders.BurstRule{MaxISI: ms("max_isi_ms", b.MaxISIMS), FirstISI: ms("first_isi_ms", b.FirstISIMS),
		MinSilence: ms("min_silence_ms", b.MinSilenceMS), MinSpikes: b.MinSpikes}
	if err := rule.Validate(); err != nil {
		key, _, _ := strings.Cut(err.Error(), " ")
		c.refuse("bursts."+key, "[bursts] %s", err)
	}
}

func (c *checker) sweep() {
	s, w := c.study, c.study.Sweep
	if len(w.Codes) == 0 {
		c.refuse("sweep.codes", "[sweep] codes is empty: name at least one code")
	}
	c.distinct("sweep.codes", w.Codes)
	c.distinct("sweep.pairs", w.Pairs)
	for _, pair := range w.Pairs {
		a, b, ok := strings.Cut(pair, "+")
		c.need(ok && a != "" && b != "" && !strings.Contains(b, "+"), "sweep.pairs", pair, `two codes joined by +, such as "event-rate+burst-fraction"`)
		c.need(a != b, "sweep.pairs", pair, "two different codes")
	}
	for _, n := range w.Cells {
		c.need(n >= 1 && n <= mostCells, "sweep.cells", n, "ensemble sizes are at least 1")
		if s.Recording.Scenario != "" {
			c.need(n <= s.Recording.Cells, "sweep.cells", n, "the scenario has %d cells", s.Recording.Cells)
		}
	}
	seen := map[Band]bool{}
	for _, b := range w.BandsHz {
		if b.Low == 0 {
			c.need(b.High > 0, "sweep.bands_hz", b.High, "an upper edge is above 0 Hz")
		}
		c.need(b.Low >= 0 && b.Low < b.High, "sweep.bands_hz", b, "a band is [low, high] with 0 ≤ low < high")
		c.need(!seen[b], "sweep.bands_hz", b, "this band stands twice")
		seen[b] = true
	}
	for _, hz := range w.InputBandwidthsHz {
		c.need(hz > 0, "sweep.input_bandwidths_hz", hz, "cut-offs are above 0 Hz")
	}
	if len(w.InputBandwidthsHz) > 0 && s.Recording.Scenario == "" {
		c.refuse("sweep.input_bandwidths_hz", "[sweep] input_bandwidths_hz draws streams anew, which only a scenario can: leave it out for files")
	}
	c.need(w.Draws >= 1 && w.Draws <= mostDraws, "sweep.draws", w.Draws, "at least 1, at most %d", mostDraws)
	bin := math.Round(w.BinMS * 1e6)
	c.need(w.BinMS > 0 && w.BinMS <= 1000, "sweep.bin_ms", w.BinMS, "milliseconds above 0, up to 1000")
	c.need(bin >= 1000 && math.Abs(bin-w.BinMS*1e6) < 1e-3, "sweep.bin_ms", w.BinMS, "a whole number of nanoseconds, at least 0.001 ms")
	c.need(w.FractionWindowMS >= 0 && w.FractionWindowMS <= 65535*w.BinMS, "sweep.fraction_window_ms", w.FractionWindowMS,
		"from 0 (chosen) to 65535 bins")
	c.need(w.FractionPrior >= 0 && w.FractionPrior <= 1e9, "sweep.fraction_prior", w.FractionPrior, "events, 0 (no shrinking) or more")
}

// distinct refuses a name that a list has twice.
func (c *checker) distinct(path string, names []string) {
	seen := map[string]bool{}
	for _, n := range names {
		c.need(!seen[n], path, n, "this name stands twice")
		seen[n] = true
	}
}

func (c *checker) userCodes() {
	seen := map[string]bool{}
	for i, code := range c.study.Codes {
		at := fmt.Sprintf("code.%d", i)
		if _, err := decoders.FromWeights(code.Name, code.Weights, code.Over); err != nil {
			c.refuse(at, "%s", err)
		}
		if seen[code.Name] {
			c.refuse(at+".name", "[[code]] name = %q: this name stands twice", code.Name)
		}
		seen[code.Name] = true
	}
}

func (c *checker) estimate() {
	e := c.study.Estimate
	if len(e.With) == 0 {
		c.refuse("estimate.with", "[estimate] with is empty: name at least one estimator")
	}
	c.distinct("estimate.with", e.With)
	c.need(e.SegmentMS >= 0 && e.SegmentMS <= longestMS, "estimate.segment_ms", e.SegmentMS, "milliseconds, or 0 to have it chosen")
	c.need(e.SegmentMS == 0 || e.SegmentMS >= 16*c.study.Sweep.BinMS, "estimate.segment_ms", e.SegmentMS, "at least 16 bins, %v ms", 16*c.study.Sweep.BinMS)
	c.need(e.Overlap >= 0 && e.Overlap < 0.95, "estimate.overlap", e.Overlap, "a share of a segment from 0 to below 0.95")
	c.need(e.Window == "hann" || e.Window == "boxcar", "estimate.window", e.Window, "hann or boxcar")
	c.need(e.HalfBandwidth == 0 || e.HalfBandwidth >= 1 && e.HalfBandwidth <= 64, "estimate.half_bandwidth", e.HalfBandwidth, "from 1 to 64, or 0 to have it chosen")
	c.need(e.Confidence >= 0.5 && e.Confidence <= 0.9999, "estimate.confidence", e.Confidence, "from 0.5 to 0.9999")
}
