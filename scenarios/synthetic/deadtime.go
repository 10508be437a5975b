package synthetic

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

// deadTime is the event process of a cell that is silent for a fixed time after
// each event, its hazard λ₀(1 + a x) following the stream x: an eventProcess to
// third order in a for the gain, to second order elsewhere. The derivation is in
// the package's documentation.
type deadTime struct {
	hazard float64 // λ₀ outside the dead time, in 1/s
	dead   float64 // τ in s
	depth  float64 // a
	band   flatBand

	node, weight []float64  // Gauss–Legendre rule on [−1, 1]
	m            complex128 // ∫ S ĝ
	mean         float64
	cumulative   []float64 // ∫₀^f S_A at steps of 2·band/(len−1): A₂ reaches twice the band
}

func newDeadTime(hazard, dead, depth float64, band flatBand) *deadTime {
	e := &deadTime{hazard: hazard, dead: dead, depth: depth, band: band}
	// Products of two responses turn by 4·band·τ cycles over the band; the rule
	// takes at least π nodes a cycle.
	n := 16 + int(math.Ceil(16*float64(band)*dead))
	e.node, e.weight = make([]float64, n), make([]float64, n)
	quad.Legendre{}.FixedLocations(e.node, e.weight, -1, 1)
	e.m = e.overBand(0, func(nu float64) complex128 { return e.response(nu) })
	e.mean = e.atRest() * (1 - hazard*depth*depth*real(e.m*e.d(0)))
	// An even number of steps puts one end at the band's edge, where S_A jumps.
	e.cumulative = make([]float64, 8*n+1)
	step := e.step()
	for i := range e.cumulative[1:] {
		e.cumulative[i+1] = e.cumulative[i] + step*e.intensity((float64(i)+0.5)*step)
	}
	return e
}

func (e *deadTime) step() float64 { return 2 * float64(e.band) / float64(len(e.cumulative)-1) }

// atRest is r₀.
func (e *deadTime) atRest() float64 { return e.hazard / (1 + e.hazard*e.dead) }

func (e *deadTime) rate() float64 { return e.mean }

// window is β̂(f), the transform of the dead time.
func (e *deadTime) window(f float64) complex128 {
	sin, cos := math.Sincos(-math.Pi * f * e.dead)
	return complex(e.dead*sinc(f*e.dead), 0) * complex(cos, sin)
}

// d is d̂(f) = 1/D(f).
func (e *deadTime) d(f float64) complex128 { return 1 / (1 + complex(e.hazard, 0)*e.window(f)) }

// response is ĝ(f) = β̂/D.
func (e *deadTime) response(f float64) complex128 { return e.window(f) * e.d(f) }

// overBand is ∫ S(ν) h(f−ν) dν, S being the spectrum of x.
func (e *deadTime) overBand(f float64, h func(float64) complex128) complex128 {
	sum := complex(0, 0)
	for i, x := range e.node {
		sum += complex(e.weight[i]/2, 0) * h(f-x*float64(e.band))
	}
	return sum
}

func (e *deadTime) gain(f float64) complex128 {
	gR := e.overBand(f, e.response)
	gC := e.overBand(f, func(k float64) complex128 { return e.response(k) * conj(e.response(f-k)) })
	third := e.response(0)*e.m + e.response(f)*gR + gC
	return complex(e.depth*e.atRest(), 0) * e.d(f) * (1 + complex(e.hazard*e.hazard*e.depth*e.depth, 0)*third)
}

func (e *deadTime) excess(f float64) float64 {
	gR := e.overBand(f, e.response)
	both := e.overBand(f, func(k float64) complex128 {
		g := e.response(k)
		return complex(e.hazard*e.hazard*abs2(g)-2*e.hazard*real(conj(e.d(f-k))*g), 0)
	})
	second := real(both) + 2*e.hazard*e.hazard*real(e.response(f)*gR)
	return abs2(e.d(f))*(e.mean+e.depth*e.depth*e.atRest()*second) - e.mean
}

func (e *deadTime) intensity(f float64) float64 {
	return abs2(e.gain(f))*e.band.density(f) + e.nonlinear(f)
}

// nonlinear is the spectrum of A₂.
func (e *deadTime) nonlinear(f float64) float64 {
	// S(ν) S(f−ν) differs from 0 where both are in the band.
	band := float64(e.band)
	low, high := math.Max(-band, f-band), math.Min(band, f+band)
	if low >= high {
		return 0
	}
	sum := 0.0
	for i, x := range e.node {
		nu := (low+high)/2 + x*(high-low)/2
		g, o := e.response(nu), e.response(f-nu)
		sum += e.weight[i] * (abs2(g) + real(g)*real(o) + imag(g)*imag(o))
	}
	scale := e.hazard * e.depth * e.depth * e.atRest()
	return scale * scale * abs2(e.d(f)) * sum * (high - low) / 2 / (4 * band * band)
}

// excessOver takes the spectrum at rest for G, enough where it is weighed by the
// square of a small slope.
func (e *deadTime) excessOver(f float64, by flatBand) float64 {
	n := 16 + int(math.Ceil(16*float64(by)*e.dead))
	sum := 0.0
	for i := range n {
		nu := float64(by) * (2*(float64(i)+0.5)/float64(n) - 1)
		sum += abs2(e.d(f-nu)) - 1
	}
	return e.mean * sum / float64(n)
}

// intensityOver is a difference of integrals, the stream being flat.
func (e *deadTime) intensityOver(f float64, by flatBand) float64 {
	return (e.integral(f+float64(by)) - e.integral(f-float64(by))) / (2 * float64(by))
}

// integral of S_A from 0 to f.
func (e *deadTime) integral(f float64) float64 {
	at, last := math.Abs(f)/e.step(), len(e.cumulative)-1
	if at >= float64(last) {
		return math.Copysign(e.cumulative[last], f)
	}
	i := int(at)
	return math.Copysign(e.cumulative[i]+(at-float64(i))*(e.cumulative[i+1]-e.cumulative[i]), f)
}
