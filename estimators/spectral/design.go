package spectral

import (
	"fmt"
	"math"

	"codeassay/estimators/fourier"
)

// Design says how a stretch of a signal is cut, tapered and transformed. It is
// immutable and may be shared; each worker owns a Scratch.
type Design struct {
	length, hop int
	dt          float64
	tapers      [][]float64 // unit energy
	halfWidthHz float64
	bins        int // transforms are kept for bins 0 … bins−1
	plan        *fourier.Plan
	selection   *fourier.Selection
}

// NewMultitaper is a design of disjoint segments of length samples with k
// Slepian tapers of time-half-bandwidth product nw (Thomson 1982, Proc. IEEE
// 70:1055–1096); k = 0 takes 2nw−1. Transforms are kept from 0 to highHz. A
// length that is no power of two is zero-padded to the next one.
func NewMultitaper(length int, nw float64, k int, dt, highHz float64) (*Design, error) {
	if k == 0 {
		k = max(1, int(math.Floor(2*nw-1+1e-9)))
	}
	if nw < 1 || float64(k) > 2*nw-1+1e-9 {
		return nil, fmt.Errorf("%d tapers at a half-bandwidth of %g: at least 1 and at most 2×half_bandwidth−1 tapers concentrate their power", k, nw)
	}
	if float64(length) < 4*nw {
		return nil, fmt.Errorf("a segment of %d samples cannot carry tapers of half-bandwidth %g: at least %.0f samples", length, nw, math.Ceil(4*nw))
	}
	tapers := fourier.Slepian(length, nw, k)
	return newDesign(length, length, tapers, nw/(float64(length)*dt), dt, highHz)
}

// NewWelch is a design of overlapping segments under one window, "hann" or
// "boxcar" (Welch 1967, IEEE Trans. Audio Electroacoust. 15:70–73). overlap is a
// share of the segment in [0, 1).
func NewWelch(length int, overlap float64, window string, dt, highHz float64) (*Design, error) {
	if !(overlap >= 0 && overlap < 1) {
		return nil, fmt.Errorf("overlap = %g: from 0 to below 1", overlap)
	}
	w := make([]float64, length)
	half := 1.0 // half the equivalent noise bandwidth, in bins
	switch window {
	case "hann":
		w, half = fourier.Hann(length), 0.75
	case "boxcar":
		half = 0.5
		for i := range w {
			w[i] = 1
		}
	default:
		return nil, fmt.Errorf("window = %q: one of hann, boxcar", window)
	}
	energy := 0.0
	for _, v := range w {
		energy += v * v
	}
	for i := range w {
		w[i] /= math.Sqrt(energy)
	}
	hop := max(1, length-int(math.Round(overlap*float64(length))))
	return newDesign(length, hop, [][]float64{w}, half/(float64(length)*dt), dt, highHz)
}

func newDesign(length, hop int, tapers [][]float64, halfWidthHz, dt, highHz float64) (*Design, error) {
	n := 16
	for n < length {
		n *= 2
	}
	// Cell k owns f_k ± Δf/2, so the last cell that touches highHz is its rounding.
	bins := min(int(math.Round(highHz*float64(n)*dt))+1, n/2+1)
	if bins < 1 {
		return nil, fmt.Errorf("band edge %g Hz: must be positive", highHz)
	}
	plan := fourier.NewPlan(n)
	return &Design{length: length, hop: hop, dt: dt, tapers: tapers, halfWidthHz: halfWidthHz, bins: bins,
		plan: plan, selection: plan.Select(0, bins)}, nil
}

// Length is the samples of a segment.
func (d *Design) Length() int { return d.length }

// Bins is the number of frequencies kept, from 0 up.
func (d *Design) Bins() int { return d.bins }

// Tapers is the number of tapers.
func (d *Design) Tapers() int { return len(d.tapers) }

// Spacing is the distance of neighbouring frequencies in Hz.
func (d *Design) Spacing() float64 { return 1 / (float64(d.plan.Len()) * d.dt) }

// Segments is the number of segments in a stretch of n samples.
func (d *Design) Segments(n int) int {
	if n < d.length {
		return 0
	}
	return (n-d.length)/d.hop + 1
}

// Items is the number of transforms of a stretch of n samples: segments × tapers.
func (d *Design) Items(n int) int { return d.Segments(n) * len(d.tapers) }

// Scratch is what one worker needs to transform signals.
type Scratch struct {
	packed fourier.Packed
	spare  []complex128
}

// NewScratch allocates a worker's scratch.
func (d *Design) NewScratch() *Scratch {
	return &Scratch{packed: d.plan.NewPacked(), spare: make([]complex128, d.bins)}
}

// Transforms writes the tapered transforms of every segment of x into dst, item
// by item (segment-major, then taper), each with Bins values, scaled so that the
// mean of |value|² over items is the two-sided spectral density in (unit of
// x)²/Hz. A nil dst is allocated. mean is subtracted from x: the mean over the
// whole recording, never of a segment.
func (d *Design) Transforms(dst []complex128, x []float64, mean float64, s *Scratch) []complex128 {
	items := d.Items(len(x))
	if dst == nil {
		dst = make([]complex128, items*d.bins)
	}
	if len(dst) != items*d.bins {
		panic("spectral: Transforms needs dst of items × bins values")
	}
	k := len(d.tapers)
	segment := func(item int) []float64 {
		start := item / k * d.hop
		return x[start : start+d.length]
	}
	// Two real segments ride in one complex transform.
	for item := 0; item < items; item += 2 {
		a := dst[item*d.bins : (item+1)*d.bins]
		if item+1 < items {
			d.plan.Pack(s.packed, segment(item), segment(item+1), d.tapers[item%k], d.tapers[(item+1)%k], mean)
		} else {
			d.plan.Pack(s.packed, segment(item), nil, d.tapers[item%k], nil, mean)
		}
		b := s.spare
		if item+1 < items {
			b = dst[(item+1)*d.bins : (item+2)*d.bins]
		}
		d.plan.Forward(s.packed)
		d.selection.Spectrum(a, b, s.packed)
	}
	scale := complex(math.Sqrt(d.dt), 0)
	for i := range dst {
		dst[i] *= scale
	}
	return dst
}

// AddAuto adds the power of every item of z to dst, which has Bins values.
func (d *Design) AddAuto(dst []float64, z []complex128) {
	for base := 0; base < len(z); base += d.bins {
		for k, v := range z[base : base+d.bins] {
			dst[k] += real(v)*real(v) + imag(v)*imag(v)
		}
	}
}

// AddCross adds z·conj(y) of every item to dst, which has Bins values.
func (d *Design) AddCross(dst []complex128, z, y []complex128) {
	for base := 0; base < len(z); base += d.bins {
		zi, yi := z[base:base+d.bins], y[base:base+d.bins]
		for k, v := range zi {
			w := yi[k]
			dst[k] += complex(real(v)*real(w)+imag(v)*imag(w), imag(v)*real(w)-real(v)*imag(w))
		}
	}
}
