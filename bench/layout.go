package bench

import (
	"codeassay/decoders"
	"codeassay/estimators"
)

// RowKind says what a row of a sweep measures.
type RowKind uint8

const (
	// Single is one code about one stream.
	Single RowKind = iota
	// Partial is one code about one stream, given all other streams.
	Partial
	// Joint is a pair of codes about all streams together.
	Joint
	// JointSpikes is the spike rate about all streams together, what a pair is
	// held against.
	JointSpikes
	// Split is the control in which one half of the cells rate-codes one stream
	// and the other half another, at equal spikes/s.
	Split
	// RawWindow is the uncorrected plug-in information: the statistic of its test.
	RawWindow
)

// RowKey names a row of a sweep by indices into its Layout. Stream, Code and
// Pair are −1 where they do not apply.
type RowKey struct {
	Estimator int
	Kind      RowKind
	Stream    int
	Code      int
	Pair      int
	Band      int
}

// RowInfo is what is known of a row before any spike is read.
type RowInfo struct {
	UsedHz   float64
	Segments int
	NEff     float64
	// NullMean and NullVar are the mean and variance of the uncorrected
	// statistic in nats/s under independence; 0 where pieces carry measured ones.
	NullMean, NullVar float64
}

// EstimatorInfo is one way of estimating that a sweep uses.
type EstimatorInfo struct {
	Name     string
	Quantity estimators.Quantity
	Spectral bool
}

// SweepBand is a band with the streams whose bits are counted in it.
type SweepBand struct {
	Band
	Streams []bool
}

// Layout says which rows a sweep has and what is common to all its pieces. It
// is settled by the settings and the recording's shape, never by the spikes.
type Layout struct {
	Cells        int
	Sizes        []int // ensemble sizes, rising; the last may be Cells
	Draws        int
	Streams      []string
	Codes        []decoders.Code
	Pairs        [][2]int // into Codes
	Bands        []SweepBand
	Estimators   []EstimatorInfo
	Rows         []RowKey
	Info         []RowInfo
	BlockWeights []float64 // length of each jackknife block, in segments
	Confidence   float64
}

// BetweenCells says how the variation between cells at a size is measured.
type BetweenCells uint8

const (
	// Unmeasured: one cell cannot be left out of one, and few draws tell little.
	Unmeasured BetweenCells = iota
	// ByDraws: the spread between the draws tells it.
	ByDraws
	// ByGroups: groups of cells are left out in turn.
	ByGroups
)

// FewestDraws is the number of draws whose spread tells the variation between
// cells.
const FewestDraws = 8

// CellsMeasured is how the variation between cells at a size is measured. Draws
// of at most half the units overlap little enough for their spread to tell it.
func (l *Layout) CellsMeasured(size int) BetweenCells {
	n := l.Sizes[size]
	switch {
	case 2*n > l.Cells && n > 1:
		return ByGroups
	case 2*n <= l.Cells && l.Draws >= FewestDraws:
		return ByDraws
	}
	return Unmeasured
}

// Values are the rows of one ensemble in one draw: the estimate over all
// blocks, and with each block left out. Unit: bits/s.
type Values struct {
	Full    []float64   // by row
	Deleted [][]float64 // by block, then row
}

// Piece is one finished draw: the unit of work that a sweep stores and resumes.
// Draw 0 is the full ensemble; draws 1 … Draws are random sub-ensembles.
type Piece struct {
	Draw  int
	Sizes []int    // into Layout.Sizes
	Value []Values // by entry of Sizes
	// NullMean and NullVar, by entry of Sizes and row, are measured by circular
	// shifts where theory gives none (NaN elsewhere); nil without such rows.
	NullMean, NullVar [][]float64
	// Spikes and Events are the counts of each sub-ensemble per second.
	SpikesPerS, EventsPerS []float64
}

// CellPiece is the variation between cells at one ensemble size: variances, by
// row, of deleting groups of cells, and of deleting each group in one block.
type CellPiece struct {
	Size              int // into Layout.Sizes
	CellVar, CrossVar []float64
	Groups            int
}

// Outcome is everything a sweep measured.
type Outcome struct {
	Layout           Layout
	Pieces           []Piece // by draw
	Cells            []CellPiece
	Chance           *Values // the burst-free surrogate of the full ensemble
	ChanceSpikesPerS float64
	Spectra          []Spectrum
	DelaysMS         []float64 // by stream
	Settings         Settings
	Recording        RecordingSummary
	Warnings         []estimators.Warning
	RowWarnings      map[RowKey][]estimators.Warning
}
