// Package fourier transforms segments of signals for spectral estimation, and
// makes the tapers they are multiplied by.
//
// Two real segments ride in one complex signal, z = a + i b. A Plan transforms
// it in place by decimation in frequency and leaves it in digit-reversed order;
// nothing is ever reordered. A Selection knows where the wanted frequencies lie
// and untangles just those, since the band of a stream is a small part of the
// spectrum. Transforms are unnormalised, Z[k] = Σ z[t] exp(−2πikt/n).
package fourier
