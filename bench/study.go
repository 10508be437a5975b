package bench

// Study is what a user asks for: one TOML file, or the built-in demo. Keys and
// their meaning are the public interface; `codeassay rank --help` prints them.
// A zero value stands for "choose", and Settings says what was chosen.
type Study struct {
	Title     string        `toml:"title"`
	Seed      uint64        `toml:"seed"`
	Recording RecordingPart `toml:"recording"`
	Bursts    BurstsPart    `toml:"bursts"`
	Sweep     SweepPart     `toml:"sweep"`
	Codes     []CodePart    `toml:"code"`
	Estimate  EstimatePart  `toml:"estimate"`

	file  string         // where it was read, "" for a study made in the program
	lines map[string]int // line of every key given, by its path in dots
}

// RecordingPart names a scenario or the files of a recording.
type RecordingPart struct {
	Scenario    string  `toml:"scenario"`
	Cells       int     `toml:"cells"`
	DurationS   float64 `toml:"duration_s"`
	Spikes      string  `toml:"spikes"`
	Streams     string  `toml:"streams"`
	UnitsTable  string  `toml:"units_table"`
	Units       int     `toml:"units"`
	Trials      string  `toml:"trials"`
	DropOutside bool    `toml:"drop_outside"`

	// Of the scenario paired-drive; zero keeps the scenario's own default.
	EventRateHz  float64   `toml:"event_rate_hz"`
	EventDepth   float64   `toml:"event_depth"`
	BurstShare   float64   `toml:"burst_share"`
	BurstDepth   float64   `toml:"burst_depth"`
	BandwidthsHz []float64 `toml:"bandwidths_hz"`
}

// BurstsPart is the burst rule.
type BurstsPart struct {
	MaxISIMS     float64 `toml:"max_isi_ms" json:"max_isi_ms"`
	MinSpikes    int     `toml:"min_spikes" json:"min_spikes"`
	FirstISIMS   float64 `toml:"first_isi_ms" json:"first_isi_ms"`
	MinSilenceMS float64 `toml:"min_silence_ms" json:"min_silence_ms"`
}

// SweepPart says which codes, sizes and bands are swept.
type SweepPart struct {
	Codes             []string  `toml:"codes" json:"codes"`
	Pairs             []string  `toml:"pairs" json:"pairs"`
	Cells             []int     `toml:"cells" json:"cells"`
	RawBandsHz        []any     `toml:"bands_hz" json:"-"` // each an upper edge or a [low, high]
	BandsHz           []Band    `toml:"-" json:"bands_hz"` // RawBandsHz, read
	InputBandwidthsHz []float64 `toml:"input_bandwidths_hz" json:"input_bandwidths_hz"`
	Draws             int       `toml:"draws" json:"draws"`
	BinMS             float64   `toml:"bin_ms" json:"bin_ms"`
	FractionWindowMS  float64   `toml:"fraction_window_ms" json:"fraction_window_ms"`
	FractionPrior     float64   `toml:"fraction_prior" json:"fraction_prior"`
}

// CodePart is a user's own code: weights by event size, optionally over another
// such sum.
type CodePart struct {
	Name    string    `toml:"name" json:"name"`
	Weights []float64 `toml:"weights" json:"weights"`
	Over    []float64 `toml:"over" json:"over"`
}

// EstimatePart says how bits are estimated.
type EstimatePart struct {
	With          []string `toml:"with" json:"with"`
	SegmentMS     float64  `toml:"segment_ms" json:"segment_ms"`
	Overlap       float64  `toml:"overlap" json:"overlap"`
	Window        string   `toml:"window" json:"window"`
	HalfBandwidth float64  `toml:"half_bandwidth" json:"half_bandwidth"`
	Align         bool     `toml:"align" json:"align"`
	Confidence    float64  `toml:"confidence" json:"confidence"`
}

// Band is a frequency band in Hz, (0 or Low) to High.
type Band struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

// Settings is every setting in force, defaults and choices included. Where a
// study says "choose", the value chosen stands here.
type Settings struct {
	Bursts   BurstsPart       `json:"bursts"`
	Sweep    SweepPart        `json:"sweep"`
	Codes    []CodePart       `json:"code"`
	Estimate EstimatePart     `json:"estimate"`
	Chosen   ChosenSettings   `json:"chosen"`
	Scenario *ScenarioInForce `json:"scenario,omitempty"`
}

// ChosenSettings are values the tool derived from the recording.
type ChosenSettings struct {
	Bands           []StreamBand  `json:"bands"`
	JackknifeBlocks int           `json:"jackknife_blocks"`
	CellGroups      int           `json:"cell_groups"`
	Tapers          int           `json:"tapers"`
	WelchSegmentMS  float64       `json:"welch_segment_ms"`
	PlugInLevels    int           `json:"plug_in_levels"`
	Delays          []StreamDelay `json:"delays"`
}

// StreamBand is the band in which a stream's own bits are counted.
type StreamBand struct {
	Stream string `json:"stream"`
	Band
}

// StreamDelay is the delay of the codes behind a stream that was removed.
type StreamDelay struct {
	Stream  string `json:"stream"`
	DelayMS Number `json:"delay_ms"`
}

// ScenarioInForce states the parameters of a synthetic scenario.
type ScenarioInForce struct {
	Name         string    `json:"name"`
	EventRateHz  float64   `json:"event_rate_hz"`
	EventDepth   float64   `json:"event_depth"`
	BurstShare   float64   `json:"burst_share"`
	BurstDepth   float64   `json:"burst_depth"`
	DeadTimeMS   float64   `json:"dead_time_ms"`
	BandwidthsHz []float64 `json:"bandwidths_hz"`
}
