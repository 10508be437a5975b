package tally

import (
	"fmt"
	"math"

	"codeassay/decoders"
)

// signal returns dst, which must have length n, or a new slice where it is nil.
func signal(dst []float64, n int) []float64 {
	if dst == nil {
		return make([]float64, n)
	}
	if len(dst) != n {
		panic(fmt.Sprintf("tally: a signal of %d values into %d", n, len(dst)))
	}
	return dst
}

// weighing is a sum of a bin's event counts with small whole weights, by one
// multiplication: the top field of counts × weights in reverse order is their
// sum of products.
type weighing struct {
	weights, longest uint64
}

// newWeighing reports whether the sum can be had that way: whole weights from 0,
// and no field of the product running over when it is taken of at most that
// many events.
func newWeighing(w [4]float64, events int) (weighing, bool) {
	for _, v := range w {
		if v < 0 || v != math.Trunc(v) || v*float64(events) > maxCount {
			return weighing{}, false
		}
	}
	return weighing{uint64(w[0])<<(2*fieldBits) | uint64(w[1])<<fieldBits | uint64(w[2]), uint64(w[3])}, true
}

// of is the sum for the words of a bin, or for packed sums of bins.
func (w weighing) of(first, second uint64) float64 {
	const events = math.MaxUint64 - fieldMask
	return float64(int64((first&events)*w.weights>>(3*fieldBits) + (second&fieldMask)*w.longest))
}

// lanes are event counts of a bin, or their sums over at most 65537 bins, in 32
// bits each.
type lanes struct {
	odd  uint64 // events of 1 spike, above them events of 3
	even uint64 // events of 2 spikes, above them events of ≥ 4
}

func lanesOf(w *[2]uint64) lanes {
	return lanes{
		odd:  w[0] >> fieldBits & (fieldMask<<32 | fieldMask),
		even: w[0]>>(2*fieldBits)&fieldMask | w[1]<<32,
	}
}

func (n lanes) add(o lanes) lanes { return lanes{n.odd + o.odd, n.even + o.even} }
func (n lanes) sub(o lanes) lanes { return lanes{n.odd - o.odd, n.even - o.even} }

// weigh is Σ weights·counts in float64, each product rounded, so that no machine
// fuses it.
func (n lanes) weigh(w *[4]float64) float64 {
	x := float64(w[0] * float64(uint32(n.odd)))
	x += float64(w[1] * float64(uint32(n.even)))
	x += float64(w[2] * float64(n.odd>>32))
	return x + float64(w[3]*float64(n.even>>32))
}

// Linear reads a weighted sum of the six basic trains, a value for each bin of
// the span: weights of spikes, of events of 1, 2, 3 and ≥ 4 spikes, and of
// Σ p̄ᵢEᵢ. dst has the span's length; nil allocates.
func (a *Accumulator) Linear(dst []float64, w [decoders.Trains]float64) []float64 {
	words := a.inner()
	dst = signal(dst, len(words))
	spikes, events, own := w[0], [4]float64(w[1:5]), w[5]/shareOne
	sum, packed := newWeighing(events, a.block.most)
	switch {
	case events == [4]float64{} && own == 0:
		for i := range words {
			dst[i] = float64(spikes * float64(words[i][0]&fieldMask))
		}
	case packed && spikes == 0 && own == 0:
		for i := range words {
			dst[i] = sum.of(words[i][0], words[i][1])
		}
	case packed && spikes == 0:
		for i := range words {
			dst[i] = sum.of(words[i][0], words[i][1]) + float64(own*float64(words[i][1]>>shareOffset))
		}
	default:
		for i := range words {
			x := float64(spikes*float64(words[i][0]&fieldMask)) + lanesOf(&words[i]).weigh(&events)
			dst[i] = x + float64(own*float64(words[i][1]>>shareOffset))
		}
	}
	return dst
}

// Ratio reads one weighted sum of events over another, both summed in a sliding
// window, a value for each bin of the span:
//
//	(num + prior·baseline) / (den + prior)
//
// and the baseline where den + prior is not above 0. Weights are of events of 1,
// 2, 3 and ≥ 4 spikes. The window of bin i is the bins
// i−⌊window/2⌋ … i−⌊window/2⌋+window−1: centred where window is odd, half a bin
// early where it is even. It reaches into the halo but not beyond the trial. dst
// has the span's length; nil allocates. Ratio panics where the halo is shorter
// than ⌊window/2⌋, or the window longer than 65535 bins.
//
// Running sums are of integers: no value depends on where the span begins.
func (a *Accumulator) Ratio(dst []float64, num, den [4]float64, window int, prior, baseline float64) []float64 {
	if window < 1 || window/2 > a.store.halo || window > maxCount {
		panic(fmt.Sprintf("tally: a window of %d bins with a halo of %d", window, a.store.halo))
	}
	dst = signal(dst, a.store.spans[a.span].Bins)
	first := a.store.halo - window/2
	r := ratio{prior: prior, above: float64(prior * baseline), baseline: baseline,
		words: a.words[first:], window: window}
	most := a.block.most * window
	over, packedNum := newWeighing(num, most)
	under, packedDen := newWeighing(den, most)
	if packedNum && packedDen {
		r.packed(dst, over, under)
	} else {
		r.wide(dst, num, den)
	}
	return dst
}

// ratio is what Ratio reads, in a window that begins at words[i] for value i.
type ratio struct {
	prior, above, baseline float64
	words                  [][2]uint64
	window                 int
}

// packed divides sums that fit the packed fields. Running sums are modulo 2⁶⁴,
// in which differences are exact; p̄ᵢEᵢ may run over, unread.
func (r *ratio) packed(dst []float64, num, den weighing) {
	prior, above, baseline := r.prior, r.above, r.baseline
	out, in := r.words[:len(dst)], r.words[r.window-1:][:len(dst)]
	var first, second uint64 // sums of the window but for its last bin
	for _, w := range r.words[:r.window-1] {
		first += w[0]
		second += w[1]
	}
	for i := range dst {
		first += in[i][0]
		second += in[i][1]
		x := baseline
		if d := den.of(first, second) + prior; d > 0 {
			x = (num.of(first, second) + above) / d
		}
		dst[i] = x
		first -= out[i][0]
		second -= out[i][1]
	}
}

// wide divides sums of any weights.
func (r *ratio) wide(dst []float64, num, den [4]float64) {
	out, in := r.words[:len(dst)], r.words[r.window-1:][:len(dst)]
	var sum lanes // of the window but for its last bin
	for i := range r.window - 1 {
		sum = sum.add(lanesOf(&r.words[i]))
	}
	for i := range dst {
		sum = sum.add(lanesOf(&in[i]))
		x := r.baseline
		if d := sum.weigh(&den) + r.prior; d > 0 {
			x = (sum.weigh(&num) + r.above) / d
		}
		dst[i] = x
		sum = sum.sub(lanesOf(&out[i]))
	}
}

// Windows reads a weighted sum of events in disjoint windows of window bins, one
// after another from the span's first bin; bins after the last whole window are
// left out. dst has a value a window; nil allocates. It panics on windows longer
// than 65535 bins.
func (a *Accumulator) Windows(dst []float64, window int, weights [4]float64) []float64 {
	if window < 1 || window > maxCount {
		panic(fmt.Sprintf("tally: windows of %d bins", window))
	}
	words := a.inner()
	dst = signal(dst, len(words)/window)
	for i := range dst {
		var sum lanes
		for j := i * window; j < (i+1)*window; j++ {
			sum = sum.add(lanesOf(&words[j]))
		}
		dst[i] = sum.weigh(&weights)
	}
	return dst
}
