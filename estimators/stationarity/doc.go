// Package stationarity asks whether a signal is what spectral estimates take it
// for: Gaussian, long against its own correlation time, and the same from
// beginning to end.
//
// Samples of a stream depend on each other, so every test counts independent
// values rather than samples: the variance of a moment of order m is inflated by
// Σ ρ^m over the autocorrelation ρ. All tests are on plain slices, and a p-value
// is NaN where there are too few independent values to tell.
package stationarity
