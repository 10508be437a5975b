package report

import (
	"math"
	"strings"

	"codeassay/bench"
	"codeassay/estimators"
)

// recipe makes a Document by formula: no estimate, but numbers of the right size
// and shape, the same on every run.
type recipe struct {
	title        string
	streams      []string
	codes        []string
	sizes        []int
	bands        [][2]float64
	inputs       []float64 // 0: not varied
	estimators   []string
	strength     func(stream, code int) float64
	pairs        bool
	given        bool
	chance       bool
	truth        bool
	detectsAbove float64 // bits/s
}

// rate of a code whose coherence is sN/(1+sN) up to width Hz.
func rate(s, cells, width float64) float64 { return width * math.Log2(1+s*cells) }

// wobble is a deterministic stand-in for sampling noise within ±1.
func wobble(a, b, c int) float64 { return math.Sin(float64(17*a+29*b+53*c) + 0.5) }

func num(x float64) bench.Number { return bench.Number(x) }

func (r recipe) document() *bench.Document {
	top := r.sizes[len(r.sizes)-1]
	doc := &bench.Document{Tool: "codeassay", Version: "0.1.0", Command: "rank", Title: r.title, Seed: 7, Platform: "amd64",
		Recording: bench.RecordingSummary{Cells: top, Trials: 1, TrialMeaning: "segments", DurationS: 600, UsedS: 600,
			Spikes: int64(top) * 4800, Events: int64(top) * 3600, Bursts: int64(top) * 900, Streams: r.streams,
			BurstFraction: 0.25, ChanceBurstFraction: 0.0204},
		Rows: []bench.Row{}, Joint: []bench.JointRow{}, Chance: []bench.Row{}, Spectra: []bench.Spectrum{}, Warnings: []estimators.Warning{}}
	doc.Settings.Bursts = bench.BurstsPart{MaxISIMS: 15, MinSpikes: 2}
	doc.Settings.Sweep = bench.SweepPart{Codes: r.codes, Cells: r.sizes, Draws: 20, BinMS: 1, FractionWindowMS: 12, FractionPrior: 16}
	doc.Settings.Estimate = bench.EstimatePart{With: r.estimators, SegmentMS: 4000, Overlap: 0.5, Window: "hann", HalfBandwidth: 2, Align: true, Confidence: 0.95}
	doc.Settings.Chosen = bench.ChosenSettings{JackknifeBlocks: 50, CellGroups: 16, Tapers: 3, WelchSegmentMS: 1024, PlugInLevels: 6}
	inputs := r.inputs
	if len(inputs) == 0 {
		inputs = []float64{0}
	}
	for _, input := range inputs {
		for _, n := range r.sizes {
			for e, est := range r.estimators {
				for b := range r.bands {
					for s := range r.streams {
						doc.Rows = append(doc.Rows, r.family(n, top, e, est, b, s, input, false)...)
						if r.given && len(r.streams) > 1 && e == 0 {
							doc.Rows = append(doc.Rows, r.family(n, top, e, est, b, s, input, true)...)
						}
					}
				}
			}
			if r.pairs {
				for b := range r.bands {
					doc.Joint = append(doc.Joint, r.joint(n, b, input))
				}
			}
		}
		for s := range r.streams {
			if r.chance {
				for b := range r.bands {
					doc.Chance = append(doc.Chance, r.surrogate(top, b, s, input)...)
				}
			}
			for c := range r.codes {
				if r.estimators[0] != "plug-in" {
					doc.Spectra = append(doc.Spectra, r.spectrum(top, s, c, input))
				}
			}
		}
	}
	if r.truth {
		t := &bench.TruthSummary{Kind: "first-order", RelativeError: 0.018}
		for _, row := range doc.Rows {
			if row.TruthBitsPerS.Known() {
				t.Rows++
				if row.CILow <= row.TruthBitsPerS && row.TruthBitsPerS <= row.CIHigh {
					t.Held++
				}
			}
		}
		doc.Truth = t
	}
	return doc
}

// family is the rows of one stream, size, band and estimator, ranked.
func (r recipe) family(n, top, e int, est string, b, s int, input float64, partial bool) []bench.Row {
	var rows []bench.Row
	band := r.bands[b]
	for c, code := range r.codes {
		width := band[1] - band[0]
		if input > 0 {
			width = math.Min(width, input)
		}
		strength := r.strength(s, c)
		if partial {
			strength *= 0.9
		}
		exact := rate(strength, float64(n), width)
		half := 0.15 + 0.03*exact
		value := exact + 0.6*half*wobble(c, n+s, e)
		row := bench.Row{Stream: r.streams[s], Given: []string{}, Code: code, Cells: n, BandLowHz: num(band[0]), BandHz: num(band[1]), UsedHz: num(width),
			InputBandwidthHz: bench.None, Estimator: est, Quantity: estimators.CoherenceRate, BitsPerS: num(value),
			CILow: num(value - half), CIHigh: num(value + half), Confidence: 0.95, CICellsLow: num(value - 1.4*half), CICellsHigh: num(value + 1.4*half),
			DrawSD: num(0.3 * half), Draws: 20, BitsPerSpike: bench.None, BitsPerEvent: bench.None, DelayMS: 0, Segments: 150, NEff: 450,
			TruthBitsPerS: bench.None, Warnings: []estimators.Warning{}}
		if partial {
			for o, name := range r.streams {
				if o != s {
					row.Given = append(row.Given, name)
				}
			}
		}
		if input > 0 {
			row.InputBandwidthHz = num(input)
		}
		if strings.HasPrefix(est, "plug-in") {
			row.Quantity, row.Segments, row.NEff = estimators.WindowInformation, 0, bench.None
		}
		if n == top {
			row.DrawSD, row.Draws = 0, 1
		}
		row.Detected = value > r.detectsAbove
		row.PValue = num(math.Exp(-4 * value / half))
		if row.PValue > 1 || !row.Detected {
			row.PValue = num(0.5 - 0.4*wobble(c, s, 0))
		}
		if row.Detected {
			row.BitsPerSpike, row.BitsPerEvent = num(value/(8*float64(n))), num(value/(6*float64(n)))
		}
		if r.truth && !strings.HasPrefix(est, "plug-in") && c < 5 {
			row.TruthBitsPerS = num(exact)
		}
		rows = append(rows, row)
	}
	rank(rows)
	return rows
}

// rank gives ranks, and a letter to every run of overlapping intervals.
func rank(rows []bench.Row) {
	place := 0
	letter, low := 'a'-1, num(math.Inf(1))
	for {
		best := -1
		for i := range rows {
			if rows[i].Detected && rows[i].Rank == nil && (best < 0 || rows[i].BitsPerS > rows[best].BitsPerS) {
				best = i
			}
		}
		if best < 0 {
			return
		}
		place++
		p := place
		rows[best].Rank = &p
		if rows[best].CIHigh < low {
			letter, low = letter+1, rows[best].CILow
		}
		rows[best].Letters = string(letter)
	}
}

func (r recipe) joint(n, b int, input float64) bench.JointRow {
	band := r.bands[b]
	value, spikes := 0.0, 0.0
	for s := range r.streams {
		value += rate(r.strength(s, 1), float64(n), band[1]-band[0])
		spikes += 0.5 * rate(r.strength(s, 1), float64(n), band[1]-band[0])
	}
	half := 0.2 + 0.03*value
	row := bench.JointRow{Streams: r.streams, Codes: []string{r.codes[1], r.codes[len(r.codes)-1]}, Cells: n, BandLowHz: num(band[0]), BandHz: num(band[1]),
		UsedHz: num(band[1] - band[0]), InputBandwidthHz: bench.None, Estimator: r.estimators[0], BitsPerS: num(value), CILow: num(value - half), CIHigh: num(value + half),
		Confidence: 0.95, DrawSD: 0.4, PValue: 1e-9, Detected: value > r.detectsAbove, SpikeRateBitsPerS: num(spikes), GainOverSpikeRate: num(value / spikes), GainLow: num(value/spikes - 0.1),
		GainHigh: num(value/spikes + 0.1), SplitBitsPerS: num(value / 1.3), GainOverSplit: 1.3, GainOverSplitLow: 1.22, GainOverSplitHigh: 1.39,
		TruthBitsPerS: bench.None, Warnings: []estimators.Warning{}}
	if input > 0 {
		row.InputBandwidthHz = num(input)
	}
	if !row.Detected {
		row.PValue = 0.31
		row.GainOverSpikeRate, row.GainLow, row.GainHigh, row.GainOverSplit, row.GainOverSplitLow, row.GainOverSplitHigh =
			bench.None, bench.None, bench.None, bench.None, bench.None, bench.None
	}
	return row
}

func (r recipe) surrogate(n, b, s int, input float64) []bench.Row {
	weak := r
	weak.truth = false
	weak.strength = func(stream, code int) float64 { return 0.08 * r.strength(stream, code) }
	rows := weak.family(n, n, 3, r.estimators[0], b, s, input, false)
	for i := range rows {
		rows[i].Rank, rows[i].Letters = nil, ""
		rows[i].CICellsLow, rows[i].CICellsHigh = bench.None, bench.None
	}
	return rows
}

func (r recipe) spectrum(n, s, c int, input float64) bench.Spectrum {
	sp := bench.Spectrum{Stream: r.streams[s], Code: r.codes[c], Cells: n, InputBandwidthHz: bench.None, Estimator: r.estimators[0], Threshold: 0.0066}
	edge := 0.0
	for _, b := range r.bands {
		edge = math.Max(edge, b[1])
	}
	if input > 0 {
		sp.InputBandwidthHz, edge = num(input), input
	}
	for k := 0; float64(k)*0.25 <= 1.15*edge; k++ {
		f := float64(k) * 0.25
		snr := r.strength(s, c) * float64(n) / (1 + math.Pow(f/edge, 24)*1e3)
		g := snr/(1+snr) + 0.012*wobble(k, s, c)
		sp.FreqHz = append(sp.FreqHz, num(f))
		sp.Coherence = append(sp.Coherence, num(g))
		sp.CILow = append(sp.CILow, num(math.Max(0, g-0.06*(1-g)-0.01)))
		sp.CIHigh = append(sp.CIHigh, num(math.Min(1, g+0.06*(1-g)+0.01)))
	}
	return sp
}

var builtIn = []string{"spike-rate", "event-rate", "singlet-rate", "burst-rate", "burst-residual", "burst-fraction", "burst-size"}

// twoDrives has the strengths of an ensemble whose events follow the first
// stream and whose burst fraction follows the second.
func twoDrives(stream, code int) float64 {
	return [2][7]float64{
		{0.010, 0.015, 0.008, 0.003, 0.00002, 0.00003, 0},
		{0.0009, 0, 0.0008, 0.004, 0.0082, 0.0088, 0.00001},
	}[stream%2][code%7]
}

// documents are what every renderer is tested on.
func documents() map[string]*bench.Document {
	sizes := func(n int) (out []int) {
		for i := 1; i <= n; i *= 2 {
			out = append(out, i)
		}
		return out
	}
	demo := recipe{title: "Two drives, one ensemble", streams: []string{"soma", "dendrite"}, codes: builtIn, sizes: sizes(1024), bands: [][2]float64{{0, 20}},
		estimators: []string{"multitaper", "welch", "plug-in"}, strength: twoDrives, pairs: true, given: true, chance: true, truth: true, detectsAbove: 0.25}
	out := map[string]*bench.Document{}

	doc := demo.document()
	doc.Settings.Scenario = &bench.ScenarioInForce{Name: "paired-drive", BandwidthsHz: []float64{20, 20}}
	doc.Warnings = []estimators.Warning{
		{Severity: estimators.Note, About: "soma", Text: "the codes follow this stream 4 ms late, 0.001 of a segment; the delay was removed", Remedy: "longer segments, if the delay is not the same for all codes"},
		{Severity: estimators.Weak, About: "plug-in", Text: "48000 windows of 12.5 ms give 4.1 samples a cell of the 6 × 6 table: too thin for the plug-in information to be trusted", Remedy: "record ≥ 590 s more"},
	}
	doc.Rows[6].Warnings = []estimators.Warning{{Severity: estimators.Note, About: "burst-size", Text: "this code never changes at this size, so it carries nothing", Remedy: "more cells, or a recording with bursts"}}
	doc.Rows[13].Warnings = doc.Rows[6].Warnings
	out["demo"] = doc

	nothing := demo
	nothing.title, nothing.streams, nothing.pairs, nothing.truth, nothing.given = "", []string{"position"}, false, false, false
	nothing.sizes, nothing.estimators = []int{1, 2, 3}, []string{"multitaper"}
	nothing.strength = func(int, int) float64 { return 0 }
	out["nothing-detected"] = nothing.document()

	single := demo
	single.title, single.streams, single.codes = "One cell, one stream", []string{"position"}, []string{"spike-rate", "burst-rate"}
	single.sizes, single.estimators, single.pairs, single.chance, single.truth = []int{1}, []string{"plug-in"}, false, false, false
	single.strength = func(_, c int) float64 { return 0.4 - 0.2*float64(c) }
	out["single-stream"] = single.document()

	bands := demo
	bands.title, bands.bands, bands.sizes = "Three bands", [][2]float64{{0, 5}, {0, 20}, {5, 40}}, []int{16, 256}
	bands.estimators, bands.truth, bands.chance, bands.given = []string{"welch"}, false, false, false
	out["bands"] = bands.document()

	inputs := demo
	inputs.title, inputs.inputs, inputs.sizes, inputs.bands = "Faster streams", []float64{5, 20, 50}, []int{8, 128, 1000}, [][2]float64{{0, 50}}
	inputs.estimators, inputs.chance, inputs.given = []string{"multitaper"}, false, false
	out["input-bandwidths"] = inputs.document()

	many := demo
	many.title, many.streams, many.sizes = "Many estimators", []string{"position"}, []int{12, 100}
	many.estimators = []string{"multitaper", "welch", "plug-in", "plug-in-raw", "plug-in-miller-madow", "plug-in-panzeri-treves"}
	many.pairs, many.given, many.chance = false, false, false
	out["many-estimators"] = many.document()

	hostile := demo
	hostile.title = "<script>alert('1')</script> & \x1b[31mred\x1b[0m_100%\\input{x}"
	hostile.streams = []string{"=cmd|' /C calc'!A0", "a|b*c_d~e^f#g$h%i&j{k}\u202egnp.exe"}
	hostile.codes = []string{"@SUM(1)", "-1+1", "a-very-long-code-name-that-no-column-would-hold-in-any-table", "漢字の名前", "line\nbreak\ttab", "</text>]]>", "\ufffd"}
	hostile.sizes, hostile.estimators = []int{3, 300}, []string{"multitaper"}
	doc = hostile.document()
	doc.Warnings = []estimators.Warning{{Severity: estimators.Weak, About: "../../etc", Text: "[link](javascript:x) `code` \x1b]0;title\x07", Remedy: "\\write18{ls}"}}
	out["hostile-names"] = doc

	out["empty"] = &bench.Document{Tool: "codeassay", Version: "0.1.0", Command: "rank", Recording: bench.RecordingSummary{DurationS: bench.None, UsedS: bench.None, BurstFraction: bench.None, ChanceBurstFraction: bench.None}}
	return out
}
