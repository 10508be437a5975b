package scenarios

import (
	"fmt"
	"math"

	"codeassay/estimators"
)

// NoTrial is the trial of a spike in a table without a trial column.
const NoTrial = math.MinInt64

// Spec is what New builds a recording from. Spikes are given either as Columns
// or as Batches.
type Spec struct {
	// SpikesFrom, StreamsFrom and UnitsFrom name the origin of the data in
	// error messages, usually a file; "" stands for "spikes", "streams" and
	// "units table".
	SpikesFrom, StreamsFrom, UnitsFrom string

	Streams []Stream
	Dt      float64 // seconds
	// TrialSamples are the samples of each trial in turn; nil: the streams are
	// one stretch. One stretch with spikes from several trials is an input that
	// they share.
	TrialSamples []int
	TrialNumbers []int64 // beside TrialSamples; nil: 0, 1, 2, …
	// StartS is the time of the first sample on the clock of the spike times,
	// in seconds: nil for 0, one value for all trials or one for each.
	StartS []float64

	Columns SpikeColumns
	Batches []SpikeBatch

	// Units are the rows of a units table: any units, in any order. NewUnit
	// makes one without limits of its own.
	Units         []Unit
	UnitsFirstRow int // number of the first row in messages
	// UnitCount declares how many units were recorded, silent ones included;
	// 0: those that spike.
	UnitCount int
	// DurationS cuts every trial to this many seconds, rounded down to whole
	// stream samples; 0: to the last sample and the interval it covers.
	DurationS float64
	// Trials says what trials mean; "" is enough unless the streams are the
	// same in all of them.
	Trials TrialMeaning
	// DropOutside leaves out spikes outside the recording and counts them;
	// otherwise they are an error.
	DropOutside bool
	// Notes are what the reader of a file found; the recording's own follow.
	Notes []estimators.Warning
}

// SpikeColumns is a table of spikes, one a row, in any order.
type SpikeColumns struct {
	Unit     []string     // name of the unit
	Index    []int        // instead of Unit: the name is this number
	TimeS    []float64    // seconds, rounded once to nanoseconds
	TimeNS   []int64      // instead of TimeS
	Trial    []int64      // nil: no trials
	Label    []EventLabel // nil: no labels
	FirstRow int          // number of the first row in messages
}

// SpikeBatch is a stretch of a spike table in its own order, run-length coded:
// the form for millions of spikes. New takes it over and may change it; the
// caller must not use it afterwards.
type SpikeBatch struct {
	Keys     []SpikeKey
	Runs     []SpikeRun   // their counts add up to len(Times)
	Times    []int64      // ns on the streams' clock
	Labels   []EventLabel // nil: no labels; then none in any batch
	FirstRow int          // number of the first row in messages
}

// SpikeKey says where a spike belongs: a unit by name and a trial by number.
type SpikeKey struct {
	Unit  string
	Trial int64
}

// SpikeRun is Count successive rows with one key, an index into Keys.
type SpikeRun struct {
	Key, Count uint32
}

// Nanoseconds converts seconds to whole nanoseconds: the product with 1e9,
// rounded to the nearest integer, ties to even. Every spike time passes through
// this rounding once, or through decimal digits that give the same. It holds for
// what CheckTime accepts.
func Nanoseconds(seconds float64) int64 {
	return int64(math.RoundToEven(seconds * 1e9))
}

// CheckTime refuses what is no time in seconds: NaN, infinities and times beyond
// ±4e9 s, two of which would still subtract within int64 nanoseconds.
func CheckTime(seconds float64) error {
	switch {
	case math.Abs(seconds) < 4e9:
		return nil
	case math.IsNaN(seconds) || math.IsInf(seconds, 0):
		return fmt.Errorf("is %v: leave the row out or correct it", seconds)
	}
	return fmt.Errorf("is %v, above 4e9 s (126 years): write seconds", seconds)
}

// Seconds converts nanoseconds to seconds; Nanoseconds(Seconds(ns)) is ns for
// times up to 11 days (1e15 ns).
func Seconds(ns int64) float64 { return float64(ns) / 1e9 }
