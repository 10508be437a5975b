package synthetic

import "math"

// Truth states the spectra of the size-resolved trains of an ensemble of marked
// events: events of 1, 2, 3 and ≥ 4 spikes at their first spike (trains 0 … 3) and
// all spikes at their own times (train 4). Spectra are two-sided densities, f in
// Hz; the formulas are in the package's documentation. It is read-only and safe for
// concurrent use.
type Truth struct {
	kind   string
	error  float64
	events eventProcess
	sizes  sizes
	isi    interval
	// bands are the cut-offs in Hz of the two streams, independent, of unit
	// variance and flat: the first drives the events, the second their sizes.
	bands [2]flatBand
}

// eventProcess states the second-order statistics of one cell's events.
type eventProcess interface {
	// rate is the mean number of events a second.
	rate() float64
	// excess is G(f): the private spectrum less the rate, in 1/s.
	excess(f float64) float64
	// gain is H(f), the response of the intensity to the first stream, in 1/s.
	gain(f float64) complex128
	// intensity is S_A(f), the spectrum of the intensity that cells share.
	intensity(f float64) float64
	// excessOver and intensityOver are G ∗ S and S_A ∗ S for the spectrum S of a
	// stream.
	excessOver(f float64, by flatBand) float64
	intensityOver(f float64, by flatBand) float64
}

// sizes are the probabilities of events of 1, 2, 3 and ≥ 4 spikes, and how they
// change with one standard deviation of the second stream.
type sizes struct{ mean, slope [4]float64 }

// interval between the spikes of a burst is uniform from low to high, in s.
type interval struct{ low, high float64 }

// clusters are the mean transforms K of events of 1, 2 and 3 spikes at frequency
// f, relative to the first spike, and the mean power of each.
func (u interval) clusters(f float64) (mean [4]complex128, power [4]float64) {
	// φ is the phase of the middle times a sinc of the width.
	sin, cos := math.Sincos(-math.Pi * f * (u.low + u.high))
	width := sinc(f * (u.high - u.low))
	phi := complex(cos*width, sin*width)
	mean = [4]complex128{1, 1 + phi, 1 + phi + phi*phi, 0}
	power = [4]float64{1, 2 + 2*real(phi), 3 + 4*real(phi) + 2*real(phi*phi), 0}
	return mean, power
}

// sinc is sin(πx)/(πx).
func sinc(x float64) float64 {
	if x *= math.Pi; math.Abs(x) > 1e-9 {
		return math.Sin(x) / x
	}
	return 1
}

// Private is the spectrum of trains i and j that one cell does not share, in 1/s.
func (t *Truth) Private(f float64) (out [5][5]complex128) {
	rate := t.events.rate()
	out = t.spread(f, t.events.excess(f), t.events.excessOver(f, t.bands[1]))
	k, power := t.isi.clusters(f)
	for i, q := range t.sizes.mean {
		own := complex(rate*q, 0)
		out[i][i] += own
		out[4][i] += k[i] * own
		out[i][4] += conj(k[i]) * own
		out[4][4] += complex(power[i], 0) * own
	}
	return out
}

// Shared is the cross-spectrum of train i of one cell with train j of another, in
// 1/s.
func (t *Truth) Shared(f float64) [5][5]complex128 {
	rate := t.events.rate()
	return t.spread(f, t.events.intensity(f), rate*rate*t.bands[1].density(f)+t.events.intensityOver(f, t.bands[1]))
}

// spread puts a spectrum between events, common to all sizes, and one of their
// marks onto the trains.
func (t *Truth) spread(f, events, marks float64) (out [5][5]complex128) {
	k, _ := t.isi.clusters(f)
	q, slope := t.sizes.mean, t.sizes.slope
	for i := range 4 {
		for j := range 4 {
			s := complex(q[i]*q[j]*events+slope[i]*slope[j]*marks, 0)
			out[i][j] += s
			out[4][j] += k[i] * s
			out[i][4] += conj(k[j]) * s
			out[4][4] += k[i] * conj(k[j]) * s
		}
	}
	return out
}

// Cross is the cross-spectrum of train i with each stream, in 1/s times the
// stream's unit over Hz.
func (t *Truth) Cross(f float64) (out [5][]complex128) {
	k, _ := t.isi.clusters(f)
	first := t.events.gain(f) * complex(t.bands[0].density(f), 0)
	second := complex(t.events.rate()*t.bands[1].density(f), 0)
	out[4] = make([]complex128, 2)
	for i := range 4 {
		out[i] = []complex128{complex(t.sizes.mean[i], 0) * first, complex(t.sizes.slope[i], 0) * second}
		for s := range 2 {
			out[4][s] += k[i] * out[i][s]
		}
	}
	return out
}

// Streams are the spectra of the streams, which are independent.
func (t *Truth) Streams(f float64) [][]complex128 {
	return [][]complex128{{complex(t.bands[0].density(f), 0), 0}, {0, complex(t.bands[1].density(f), 0)}}
}

// Kind says how the truth is known: exact, first-order (a closed form for small
// modulation) or reference (a long run).
func (t *Truth) Kind() string { return t.kind }

// RelativeError bounds what the closed form leaves out, relative to a rate in
// bits/s.
func (t *Truth) RelativeError() float64 { return t.error }

// BurstShare is p̄, the share of events that are bursts: the baseline that the
// residual subtracts of each event.
func (t *Truth) BurstShare() float64 { return 1 - t.sizes.mean[0] }

// flatBand is the cut-off in Hz of a stream of unit variance, flat below it.
type flatBand float64

// density is the spectrum of the stream, two-sided, in 1/Hz.
func (b flatBand) density(f float64) float64 {
	if math.Abs(f) > float64(b) {
		return 0
	}
	return 1 / (2 * float64(b))
}

func conj(c complex128) complex128 { return complex(real(c), -imag(c)) }

func abs2(c complex128) float64 { return real(c)*real(c) + imag(c)*imag(c) }
