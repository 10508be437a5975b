package fourier

import (
	"fmt"
	"math"
	"math/bits"
	"sync"
)

// Packed holds a complex signal of n values, real parts first, then imaginary
// parts from offset n + gap. The gap keeps the two from sharing cache sets.
type Packed []float64

// gap is one cache line of float64.
const gap = 8

// Plan transforms signals of one power-of-two length. It is immutable and may be
// shared between goroutines.
type Plan struct {
	n      int
	pairs  []float64 // twiddles of the radix-2 pass; nil where n is a power of four
	stages []stage   // radix-4 passes, from the longest down to blocks of 16
}

// stage holds the twiddles of one radix-4 pass over blocks of 4·quarter values:
// cosines and sines of w^j, then of w^2j and w^3j, quarter values each.
type stage struct {
	quarter  int
	twiddles []float64
}

var plans sync.Map // int → *Plan

// NewPlan returns the plan of length n, a power of two of at least 16; plans are
// kept and shared. It panics otherwise.
func NewPlan(n int) *Plan {
	if n < 16 || bits.OnesCount(uint(n)) != 1 {
		panic(fmt.Sprintf("fourier: length %d is not a power of two of at least 16", n))
	}
	if p, ok := plans.Load(n); ok {
		return p.(*Plan)
	}
	p := &Plan{n: n}
	m := n
	if bits.TrailingZeros(uint(n))%2 == 1 {
		m /= 2
		p.pairs = twiddles(n, m, 1)
	}
	for ; m >= 16; m /= 4 {
		p.stages = append(p.stages, stage{quarter: m / 4, twiddles: twiddles(m, m/4, 3)})
	}
	kept, _ := plans.LoadOrStore(n, p)
	return kept.(*Plan)
}

// twiddles are, for each power 1 … powers, count cosines and then count sines of
// −2π power j/m.
func twiddles(m, count, powers int) []float64 {
	out := make([]float64, 0, 2*powers*count)
	for power := 1; power <= powers; power++ {
		for j := range count {
			out = append(out, math.Cos(2*math.Pi*float64(power*j%m)/float64(m)))
		}
		for j := range count {
			out = append(out, -math.Sin(2*math.Pi*float64(power*j%m)/float64(m)))
		}
	}
	return out
}

// Len is the number of complex values.
func (p *Plan) Len() int { return p.n }

// NewPacked allocates a signal for the plan.
func (p *Plan) NewPacked() Packed { return make(Packed, 2*p.n+gap) }

func (p *Plan) split(z Packed) (re, im []float64) {
	if len(z) != 2*p.n+gap {
		panic("fourier: a signal of another length than the plan's")
	}
	return z[:p.n], z[p.n+gap:]
}

// Pack sets dst to wa·(a − mean) + i·wb·(b − mean), zero beyond the segments' end.
// a must be no longer than the plan; b is nil (zero) or as long as a; a nil window
// is ones.
func (p *Plan) Pack(dst Packed, a, b, wa, wb []float64, mean float64) {
	re, im := p.split(dst)
	if len(a) > p.n || b != nil && len(b) != len(a) {
		panic("fourier: segments must be of equal length, at most the plan's")
	}
	fill(re, a, wa, mean)
	fill(im, b, wb, mean)
}

func fill(dst, x, w []float64, mean float64) {
	if w == nil {
		for i, v := range x {
			dst[i] = v - mean
		}
	} else {
		weigh(dst[:len(x)], x, w[:len(x)], mean)
	}
	clear(dst[len(x):])
}

// Forward transforms z in place; the output is in digit-reversed order.
func (p *Plan) Forward(z Packed) {
	re, im := p.split(z)
	if p.pairs == nil {
		p.forward(re, im, 0)
		return
	}
	half := p.n / 2
	radix2(re, im, p.pairs)
	p.forward(re[:half], im[:half], 0)
	p.forward(re[half:], im[half:], 0)
}

// depthFirst is the length above which a radix-4 pass is followed by its quarters
// one after another, so that each stays in the first-level cache.
const depthFirst = 1024

func (p *Plan) forward(re, im []float64, level int) {
	n := len(re)
	if n > depthFirst {
		radix4(re, im, &p.stages[level])
		for q := 0; q < n; q += n / 4 {
			p.forward(re[q:q+n/4], im[q:q+n/4], level+1)
		}
		return
	}
	for ; level < len(p.stages)-1; level++ {
		radix4(re, im, &p.stages[level])
	}
	last16(re, im, p.stages[level].twiddles)
}

// position is where frequency k is left. Each pass sends frequencies k mod 4 (the
// radix-2 pass: mod 2) to a quarter of their own; the last two passes leave their
// 16 values in natural order.
func (p *Plan) position(k int) int {
	at, m := 0, p.n
	if p.pairs != nil {
		m /= 2
		at += k % 2 * m
		k /= 2
	}
	for m > 16 {
		m /= 4
		at += k % 4 * m
		k /= 4
	}
	return at + k
}

// Selection is a range of frequencies of a plan. It is immutable.
type Selection struct {
	n      int
	at     []int32 // position of bin k
	mirror []int32 // position of bin n−k
}

// Select prepares bins k0 … k1−1, with 0 ≤ k0 < k1 ≤ n/2+1.
func (p *Plan) Select(k0, k1 int) *Selection {
	if k0 < 0 || k1 <= k0 || k1 > p.n/2+1 {
		panic(fmt.Sprintf("fourier: bins %d to %d of a transform of %d", k0, k1, p.n))
	}
	s := &Selection{n: p.n}
	for k := k0; k < k1; k++ {
		s.at = append(s.at, int32(p.position(k)))
		s.mirror = append(s.mirror, int32(p.position((p.n-k)%p.n)))
	}
	return s
}

// Spectrum untangles the transforms of the two segments packed in z, bin by bin:
// a gets (Z[k] + Z*[n−k])/2 and b gets (Z[k] − Z*[n−k])/2i.
func (s *Selection) Spectrum(a, b []complex128, z Packed) {
	re, im := z[:s.n], z[s.n+gap:]
	a, b = a[:len(s.at)], b[:len(s.at)]
	for i, k := range s.at {
		m := s.mirror[i]
		a[i] = complex(0.5*(re[k]+re[m]), 0.5*(im[k]-im[m]))
		b[i] = complex(0.5*(im[k]+im[m]), 0.5*(re[m]-re[k]))
	}
}
