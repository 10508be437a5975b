// Package spectral estimates information rates from spectra.
//
// Cut two signals into segments, taper and transform them (a Design), average
// cross-spectra, and integrate −log2(1−γ²) over a band of frequency cells: that
// is the coherence rate, a lower bound on the information that a code carries
// about a Gaussian stream (Rieke, Warland, de Ruyter van Steveninck and Bialek
// 1997, Spikes; Borst and Theunissen 1999, Nat. Neurosci. 2:947–957).
//
// Every frequency is corrected by the exact finite-sample bias of the
// log-determinant of a complex Wishart matrix, and independence is tested
// against a moment-matched gamma law. Information does it all for two slices;
// the other functions are the parts from which a sweep is built.
//
// Conventions: frequencies in Hz, times in s, spectra are two-sided densities,
// n is the number of independent complex estimates averaged at a frequency.
package spectral
