// Package estimators answers one question: how many bits?
//
// It holds the few types that the estimation packages below it share. The
// estimators themselves live in sub-packages and work on plain slices: draw or
// record some signals, estimate an information rate, keep the interval and the
// warnings beside it.
//
// Of the sub-packages, seed, fourier and resampling are the floor: every other
// sub-package may use them. No other sub-package imports a sibling.
package estimators

// Quantity says what a number of bits means. Only like quantities may be
// compared, ranked or held against a truth.
type Quantity string

const (
	// CoherenceRate is −∫ log2(1−γ²) df in bits/s: a lower bound on the
	// information rate when the stream is Gaussian.
	CoherenceRate Quantity = "coherence-rate"
	// WindowInformation is bits a window × windows a second. It is not an
	// information rate where windows depend on each other.
	WindowInformation Quantity = "window-information"
)

// Severity ranks a warning by its effect on the result.
type Severity string

const (
	// Note is worth knowing and changes the result by less than one standard error.
	Note Severity = "note"
	// Weak marks data whose effect on a result exceeds one standard error.
	Weak Severity = "warning"
)

// Warning tells of weak data. It is neither an error (bad input) nor a panic
// (misuse): the result stands, with this beside it.
type Warning struct {
	Severity Severity `json:"severity"`
	// About names the stream, code, unit or setting concerned.
	About string `json:"about"`
	// Text says what is wrong and by how much.
	Text string `json:"text"`
	// Remedy says what would suffice.
	Remedy string `json:"remedy"`
}

// Rate is an information rate in bits/s with its interval. It is never clipped
// at zero: clipping biases averages.
type Rate struct {
	BitsPerS   float64
	Low, High  float64 // interval at Confidence
	Confidence float64 // for example 0.95
	DoF        float64 // degrees of freedom behind the interval
	PValue     float64 // of a test of independence, never from the interval
	Warnings   []Warning
}
