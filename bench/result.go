package bench

import (
	"encoding/json"
	"math"
	"slices"

	"codeassay/estimators"
)

// Number is a float64 that JSON shows as null where it could not be computed
// (NaN or infinite), and otherwise in shortest form.
type Number float64

// None is the Number that could not be computed.
var None = Number(math.NaN())

// Known reports whether n was computed.
func (n Number) Known() bool { return !math.IsNaN(float64(n)) && !math.IsInf(float64(n), 0) }

// MarshalJSON writes null for what is not Known.
func (n Number) MarshalJSON() ([]byte, error) {
	if !n.Known() {
		return []byte("null"), nil
	}
	return json.Marshal(float64(n))
}

// UnmarshalJSON reads null as None.
func (n *Number) UnmarshalJSON(b []byte) error {
	if string(b) == "null" {
		*n = None
		return nil
	}
	var f float64
	if err := json.Unmarshal(b, &f); err != nil {
		return err
	}
	*n = Number(f)
	return nil
}

// Document is the result of one command: all tables, figures and pages are made
// from it, never from a rerun. It carries no clock, path, worker count or
// commit, so that equal studies give equal bytes.
type Document struct {
	Tool      string               `json:"tool"`
	Version   string               `json:"version"`
	Command   string               `json:"command"`
	Title     string               `json:"title,omitempty"`
	Seed      uint64               `json:"seed"`
	Platform  string               `json:"platform"`
	Recording RecordingSummary     `json:"recording"`
	Settings  Settings             `json:"settings"`
	Rows      []Row                `json:"rows"`
	Joint     []JointRow           `json:"joint"`
	Chance    []Row                `json:"chance"`
	Spectra   []Spectrum           `json:"spectra"`
	Truth     *TruthSummary        `json:"truth,omitempty"`
	Warnings  []estimators.Warning `json:"warnings"`
}

// RecordingSummary says what was read.
type RecordingSummary struct {
	Cells               int      `json:"cells"`
	Trials              int      `json:"trials"`
	TrialMeaning        string   `json:"trial_meaning"`
	DurationS           Number   `json:"duration_s"`
	UsedS               Number   `json:"used_s"` // whole segments of the primary estimator
	Spikes              int64    `json:"spikes"`
	Events              int64    `json:"events"`
	Bursts              int64    `json:"bursts"`
	Streams             []string `json:"streams"`
	BurstFraction       Number   `json:"burst_fraction"`
	ChanceBurstFraction Number   `json:"chance_burst_fraction"`
}

// Row is the information of one code about one stream at one ensemble size, in
// one band, by one estimator.
type Row struct {
	Stream           string               `json:"stream"`
	Given            []string             `json:"given"`
	Code             string               `json:"code"`
	Cells            int                  `json:"cells"`
	BandLowHz        Number               `json:"band_low_hz"`
	BandHz           Number               `json:"band_hz"`
	UsedHz           Number               `json:"used_hz"`
	InputBandwidthHz Number               `json:"input_bandwidth_hz"`
	Estimator        string               `json:"estimator"`
	Quantity         estimators.Quantity  `json:"quantity"`
	BitsPerS         Number               `json:"bits_per_s"`
	CILow            Number               `json:"ci_low"`
	CIHigh           Number               `json:"ci_high"`
	Confidence       Number               `json:"confidence"`
	CICellsLow       Number               `json:"ci_cells_low"`
	CICellsHigh      Number               `json:"ci_cells_high"`
	DrawSD           Number               `json:"draw_sd"`
	Draws            int                  `json:"draws"`
	PValue           Number               `json:"p_value"`
	Detected         bool                 `json:"detected"`
	Rank             *int                 `json:"rank"`
	Letters          string               `json:"letters"`
	BitsPerSpike     Number               `json:"bits_per_spike"`
	BitsPerEvent     Number               `json:"bits_per_event"`
	DelayMS          Number               `json:"delay_ms"`
	Segments         int                  `json:"segments"`
	NEff             Number               `json:"n_eff"`
	TruthBitsPerS    Number               `json:"truth_bits_per_s"`
	Warnings         []estimators.Warning `json:"warnings"`
}

// JointRow is the information of a pair of codes, read together, about all
// listed streams together.
type JointRow struct {
	Streams           []string             `json:"streams"`
	Codes             []string             `json:"codes"`
	Cells             int                  `json:"cells"`
	BandLowHz         Number               `json:"band_low_hz"`
	BandHz            Number               `json:"band_hz"`
	UsedHz            Number               `json:"used_hz"`
	InputBandwidthHz  Number               `json:"input_bandwidth_hz"`
	Estimator         string               `json:"estimator"`
	BitsPerS          Number               `json:"bits_per_s"`
	CILow             Number               `json:"ci_low"`
	CIHigh            Number               `json:"ci_high"`
	Confidence        Number               `json:"confidence"`
	DrawSD            Number               `json:"draw_sd"`
	PValue            Number               `json:"p_value"`
	Detected          bool                 `json:"detected"`
	SpikeRateBitsPerS Number               `json:"spike_rate_bits_per_s"`
	GainOverSpikeRate Number               `json:"gain_over_spike_rate"`
	GainLow           Number               `json:"gain_low"`
	GainHigh          Number               `json:"gain_high"`
	SplitBitsPerS     Number               `json:"split_bits_per_s"`
	GainOverSplit     Number               `json:"gain_over_split"`
	GainOverSplitLow  Number               `json:"gain_over_split_low"`
	GainOverSplitHigh Number               `json:"gain_over_split_high"`
	TruthBitsPerS     Number               `json:"truth_bits_per_s"`
	Warnings          []estimators.Warning `json:"warnings"`
}

// Spectrum is the coherence of one code with one stream, magnitude-squared and
// bias-corrected, at the largest ensemble size.
type Spectrum struct {
	Stream           string   `json:"stream"`
	Code             string   `json:"code"`
	Cells            int      `json:"cells"`
	InputBandwidthHz Number   `json:"input_bandwidth_hz"`
	Estimator        string   `json:"estimator"`
	FreqHz           []Number `json:"freq_hz"`
	Coherence        []Number `json:"coherence"`
	CILow            []Number `json:"ci_low"`
	CIHigh           []Number `json:"ci_high"`
	// Threshold is the pointwise level that independent signals exceed with
	// probability 1 − confidence.
	Threshold Number `json:"threshold"`
}

// TruthSummary says how the intervals of a synthetic scenario fared against its
// known truth, over the rows of linear codes.
type TruthSummary struct {
	Kind          string `json:"kind"`           // exact, first-order or reference
	RelativeError Number `json:"relative_error"` // of the truth itself
	Rows          int    `json:"rows"`
	Held          int    `json:"held"` // rows whose interval holds the truth
}

// MarkInputBandwidth says of every row that the streams were drawn with this
// cut-off in Hz.
func (d *Document) MarkInputBandwidth(hz float64) {
	for i := range d.Rows {
		d.Rows[i].InputBandwidthHz = Number(hz)
	}
	for i := range d.Joint {
		d.Joint[i].InputBandwidthHz = Number(hz)
	}
	for i := range d.Chance {
		d.Chance[i].InputBandwidthHz = Number(hz)
	}
	for i := range d.Spectra {
		d.Spectra[i].InputBandwidthHz = Number(hz)
	}
}

// Append adds the rows of a document of the same study, drawn with another input
// bandwidth.
func (d *Document) Append(o *Document) {
	d.Rows = append(d.Rows, o.Rows...)
	d.Joint = append(d.Joint, o.Joint...)
	d.Chance = append(d.Chance, o.Chance...)
	d.Spectra = append(d.Spectra, o.Spectra...)
	for _, w := range o.Warnings {
		if !slices.Contains(d.Warnings, w) {
			d.Warnings = append(d.Warnings, w)
		}
	}
	if d.Truth != nil && o.Truth != nil {
		d.Truth.Rows += o.Truth.Rows
		d.Truth.Held += o.Truth.Held
		d.Truth.RelativeError = max(d.Truth.RelativeError, o.Truth.RelativeError)
	}
}
