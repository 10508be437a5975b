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
	stages []stage // from length n down to 4
}

// stage holds the twiddles w^j, w^2j, w^3j, j < m/4, of one butterfly length m.
type stage struct {
	m      int
	c1, s1 []float64
	c2, s2 []float64
	c3, s3 []float64
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
	for m := n; m >= 4; m /= 4 {
		q := m / 4
		s := stage{m: m}
		for k, pair := range []*[]float64{&s.c1, &s.s1, &s.c2, &s.s2, &s.c3, &s.s3} {
			*pair = make([]float64, q)
			for j := range q {
				sin, cos := math.Sincos(-2 * math.Pi * float64((k/2+1)*j%m) / float64(m))
				if k%2 == 0 {
					(*pair)[j] = cos
				} else {
					(*pair)[j] = sin
				}
			}
		}
		p.stages = append(p.stages, s)
	}
	kept, _ := plans.LoadOrStore(n, p)
	return kept.(*Plan)
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

// Pack sets dst to wa·a + i·wb·b, zero beyond the segments' end. a must be no
// longer than the plan; b is nil (zero) or as long as a; a nil window is ones.
func (p *Plan) Pack(dst Packed, a, b, wa, wb []float64) {
	re, im := p.split(dst)
	if len(a) > p.n || b != nil && len(b) != len(a) {
		panic("fourier: segments must be of equal length, at most the plan's")
	}
	fill(re, a, wa)
	fill(im, b, wb)
}

func fill(dst, x, w []float64) {
	if w == nil {
		copy(dst, x)
	} else {
		w = w[:len(x)]
		for i, v := range x {
			dst[i] = v * w[i]
		}
	}
	clear(dst[len(x):])
}

// Forward transforms z in place; the output is in digit-reversed order.
func (p *Plan) Forward(z Packed) {
	re, im := p.split(z)
	p.forward(re, im, 0)
}

// depthFirst is the length above which a butterfly pass is followed by its
// quarters one after another, so that each stays in the first-level cache.
const depthFirst = 1024

func (p *Plan) forward(re, im []float64, level int) {
	m := len(re)
	if m > depthFirst {
		butterflies(re, im, &p.stages[level])
		for q := 0; q < m; q += m / 4 {
			p.forward(re[q:q+m/4], im[q:q+m/4], level+1)
		}
		return
	}
	length := m
	for ; length >= 4; length /= 4 {
		for at := 0; at < m; at += length {
			butterflies(re[at:at+length], im[at:at+length], &p.stages[level])
		}
		level++
	}
	if length == 2 {
		for at := 0; at < m; at += 2 {
			re[at], re[at+1] = re[at]+re[at+1], re[at]-re[at+1]
			im[at], im[at+1] = im[at]+im[at+1], im[at]-im[at+1]
		}
	}
}

// butterflies is one radix-4 pass of decimation in frequency. Products are
// wrapped in float64 so that no platform fuses them with the sum that follows:
// the same bits everywhere.
func butterflies(re, im []float64, s *stage) {
	q := s.m / 4
	r0, r1, r2, r3 := re[:q], re[q:2*q], re[2*q:3*q], re[3*q:4*q]
	i0, i1, i2, i3 := im[:q], im[q:2*q], im[2*q:3*q], im[3*q:4*q]
	c1, s1, c2, s2, c3, s3 := s.c1[:q], s.s1[:q], s.c2[:q], s.s2[:q], s.c3[:q], s.s3[:q]
	for j := range q {
		sumR, difR := r0[j]+r2[j], r0[j]-r2[j]
		sumI, difI := i0[j]+i2[j], i0[j]-i2[j]
		oddR, turnI := r1[j]+r3[j], r1[j]-r3[j]
		oddI, turnR := i1[j]+i3[j], i1[j]-i3[j]
		r0[j], i0[j] = sumR+oddR, sumI+oddI
		// −i(b−d) has real part Im(b−d) and imaginary part −Re(b−d).
		xr, xi := difR+turnR, difI-turnI
		r1[j], i1[j] = float64(xr*c1[j])-float64(xi*s1[j]), float64(xr*s1[j])+float64(xi*c1[j])
		xr, xi = sumR-oddR, sumI-oddI
		r2[j], i2[j] = float64(xr*c2[j])-float64(xi*s2[j]), float64(xr*s2[j])+float64(xi*c2[j])
		xr, xi = difR-turnR, difI+turnI
		r3[j], i3[j] = float64(xr*c3[j])-float64(xi*s3[j]), float64(xr*s3[j])+float64(xi*c3[j])
	}
}

// position is where frequency k of a transform of length m is left.
func position(k, m int) int {
	at := 0
	for m >= 4 {
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
		s.at = append(s.at, int32(position(k, p.n)))
		s.mirror = append(s.mirror, int32(position((p.n-k)%p.n, p.n)))
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
