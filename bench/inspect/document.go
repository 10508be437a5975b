package inspect

import (
	"codeassay/bench"
	"codeassay/estimators"
)

// Document is the result: text, tables and figures are made from it. NaN is
// null in JSON.
type Document struct {
	Tool      string                 `json:"tool"`
	Version   string                 `json:"version"`
	Command   string                 `json:"command"`
	Title     string                 `json:"title,omitempty"`
	Seed      uint64                 `json:"seed"`
	Platform  string                 `json:"platform"`
	Recording bench.RecordingSummary `json:"recording"`
	Settings  Settings               `json:"settings"`
	// Rows are the units in the recording's order.
	Rows         []Unit               `json:"rows"`
	Rates        Rates                `json:"rates"`
	Intervals    Intervals            `json:"intervals"`
	Sizes        Sizes                `json:"event_sizes"`
	Steadiness   Steadiness           `json:"rate_over_time"`
	Streams      []Stream             `json:"streams"`
	Correlations []StreamCorrelation  `json:"stream_correlations"`
	Pairs        PairCheck            `json:"unit_pairs"`
	Warnings     []estimators.Warning `json:"warnings"`
}

// Settings are the settings in force.
type Settings struct {
	Bursts bench.BurstsPart `json:"bursts"`
}

// Unit describes one unit.
type Unit struct {
	Unit          string       `json:"unit"`
	Spikes        int          `json:"spikes"`
	SpikesPerS    bench.Number `json:"spikes_per_s"`
	Events        int          `json:"events"`
	EventsPerS    bench.Number `json:"events_per_s"`
	Bursts        int          `json:"bursts"`
	BurstFraction bench.Number `json:"burst_fraction"`
	// Chance is the burst fraction that a cell without bursts would show at
	// this event rate.
	Chance bench.Number `json:"chance_burst_fraction"`
	// IntervalCV is the standard deviation of the intervals over their mean: 1
	// for a Poisson train, more with bursts.
	IntervalCV bench.Number `json:"interval_cv"`
	// Below1MS is the number of intervals shorter than 1 ms.
	Below1MS int `json:"intervals_below_1_ms"`
	// DriftP is the p-value of a test that the rate does not change.
	DriftP bench.Number `json:"drift_p_value"`

	maxISI int64 // ns, for the chance
}

// Spread summarises a quantity over units.
type Spread struct {
	Min    bench.Number `json:"min"`
	Lower  bench.Number `json:"lower_quartile"`
	Median bench.Number `json:"median"`
	Upper  bench.Number `json:"upper_quartile"`
	Max    bench.Number `json:"max"`
}

// Rates are per second, over the units that spike.
type Rates struct {
	Spikes        Spread `json:"spikes_per_s"`
	Events        Spread `json:"events_per_s"`
	BurstFraction Spread `json:"burst_fraction"`
	Silent        int    `json:"silent_units"`
	SingleSpike   int    `json:"units_with_one_spike"`
}

// Intervals is the histogram of inter-spike intervals over all units.
type Intervals struct {
	Total int64 `json:"total"`
	// Bins are logarithmic, ten a decade, with the burst threshold an edge. An
	// interval equal to an upper edge is inside.
	Bins []IntervalBin `json:"bins"`
	// WithinThreshold is the share of intervals up to the burst threshold.
	WithinThreshold bench.Number `json:"within_threshold"`
	// ValleyMS is the interval between the peak of short intervals and that of
	// long ones where the two are well apart, and Void how well (0 to 1).
	ValleyMS bench.Number `json:"valley_ms"`
	Void     bench.Number `json:"void"`
}

// IntervalBin holds the intervals in (LowMS, HighMS]. The first bin also holds
// shorter ones, the last longer ones.
type IntervalBin struct {
	LowMS  bench.Number `json:"low_ms"`
	HighMS bench.Number `json:"high_ms"`
	Count  int64        `json:"count"`
}

// Sizes are the shares of events of 1, 2, 3 and ≥ 4 spikes.
type Sizes struct {
	Singlets bench.Number `json:"singlets"`
	Doublets bench.Number `json:"doublets"`
	Triplets bench.Number `json:"triplets"`
	Longer   bench.Number `json:"longer"`
}

// Steadiness is a quantity in ten successive blocks, with the tests of its
// change.
type Steadiness struct {
	Blocks []bench.Number `json:"blocks"`
	// Trend is the change from start to end along a straight line, as a share of
	// the mean for rates and of the standard deviation for streams.
	Trend   bench.Number `json:"trend"`
	TrendSE bench.Number `json:"trend_se"`
	PValue  bench.Number `json:"p_value"`
}

// Stream describes one stream.
type Stream struct {
	Stream         string       `json:"stream"`
	Measure        string       `json:"unit"`
	Samples        int          `json:"samples"`
	DtMS           bench.Number `json:"dt_ms"`
	Mean           bench.Number `json:"mean"`
	SD             bench.Number `json:"sd"`
	Min            bench.Number `json:"min"`
	Max            bench.Number `json:"max"`
	Skewness       bench.Number `json:"skewness"`
	ExcessKurtosis bench.Number `json:"excess_kurtosis"`
	GaussianP      bench.Number `json:"gaussian_p_value"`
	VisiblyOther   bool         `json:"visibly_not_gaussian"`
	// BandHz is the upper edge of the stream's band, estimated unless BandKnown.
	BandHz    bench.Number `json:"band_hz"`
	BandKnown bool         `json:"band_known"`
	// Independent is how many independent values the stream is worth.
	Independent bench.Number `json:"independent_values"`
	OverTime    Steadiness   `json:"over_time"`
	Spectrum    []Power      `json:"spectrum"`
}

// Power is the share of a stream's power in a band, and its density relative to
// the highest one.
type Power struct {
	LowHz  bench.Number `json:"low_hz"`
	HighHz bench.Number `json:"high_hz"`
	Share  bench.Number `json:"share"`
	DB     bench.Number `json:"density_db"`
}

// StreamCorrelation is Pearson's correlation of two streams.
type StreamCorrelation struct {
	Streams     [2]string    `json:"streams"`
	Correlation bench.Number `json:"correlation"`
	PValue      bench.Number `json:"p_value"`
}

// PairCheck says which units look like parts or copies of one cell.
type PairCheck struct {
	// Units and Seconds compared; both may be fewer than recorded where all
	// would take too long.
	Units   int          `json:"units"`
	Seconds bench.Number `json:"seconds"`
	// Followers counts pairs of which one follows the other within the burst
	// threshold as the later spikes of one cell would; Copies counts pairs with
	// common spikes. Found lists the clearest of both.
	Followers int    `json:"followers"`
	Copies    int    `json:"copies"`
	Found     []Pair `json:"found"`
}

// Pair is a pair of units that looks like one cell.
type Pair struct {
	Kind  string `json:"kind"` // follower or copy
	First string `json:"first"`
	Then  string `json:"then"`
	// Count of coincidences, and how many chance and common drive let expect.
	Count    int          `json:"count"`
	Expected bench.Number `json:"expected"`
	Z        bench.Number `json:"z"`
	// Share of the rarer unit's spikes in coincidences beyond the expected.
	Share bench.Number `json:"share"`
	// Alone is the share of a follower's coincidences in which the first unit
	// itself stays silent, as the lost rest of a burst would have it.
	Alone bench.Number `json:"alone"`
}
