package synthetic

import "math"

// Truth states the spectra of the size-resolved trains of paired-drive: events of
// 1, 2, 3 and ≥ 4 spikes at their first spike (trains 0 … 3) and all spikes at
// their own times (train 4). Two-sided densities, f in Hz.
//
// # Derivation
//
// Given soma x, the intensity of events is A(t) = λ(t)[1 − ∫_{t−τ}^t A], with
// λ = λ₀(1 + a x), since the events in a window of the dead time τ exclude each
// other. With the box β of length τ, D(f) = 1 + λ₀ β̂(f) and r₀ = λ₀/(1+λ₀τ):
//
//	A₁ = a r₀ d∗x,           d̂ = 1/D
//	A₂ = −λ₀ a² r₀ d∗[x·(g∗x)],      ĝ = β̂/D
//	A₃ = λ₀² a³ r₀ d∗[x·(g∗[x·(g∗x)])].
//
// A₁ is the linear response (Cox 1962, Renewal Theory; Franklin and Bair 1995,
// SIAM J. Appl. Math. 55:1074–1093). A₂ is noise that all cells share, of spectrum
// (λ₀ a² r₀)²|d̂|² ∫S(ν)S(f−ν)[|ĝ(ν)|² + ĝ(ν)ĝ*(f−ν)]dν for Gaussian x, and it
// moves the mean rate by −λ₀ a² r₀ m/D(0), m = ∫S ĝ. The part of A₃ that follows x
// multiplies the gain by 1 + λ₀² a² [ĝ(0) m + (g·R)^ ĝ + (g·C)^], with R the
// autocorrelation of x and C(s) that of x with g∗x (the three ways to pair off two
// of three Gaussian factors). Derived here, verified by simulation.
//
// Events are marked independently, size k with probability q_k = q̄_k + q′_k b y,
// y the stream dendrite. Cells share the intensities A q_k, so with S_A the
// spectrum of A and r its mean,
//
//	shared_kl = q̄_k q̄_l S_A + b² q′_k q′_l (r² S_yy + S_A ∗ S_yy)
//	cross_kx  = q̄_k H S_xx,  cross_ky = q′_k b r S_yy.
//
// A cell has of its own the renewal spectrum r/|D|², thinned to each size:
//
//	private_kl = δ_kl r q̄_k + q̄_k q̄_l G + b² q′_k q′_l (G ∗ S_yy),  G = r(1/|D|² − 1).
//
// Spikes after the first are delayed copies: in-burst intervals U are uniform,
// φ = E e^{−2πifU}, so an event of k spikes has the mean transform
// K_k = 1 + φ + … + φ^{k−1} and spikes of one event have the power E|Σ e^{…}|² in
// place of |K_k|² (Bartlett 1963, J. R. Stat. Soc. B 25:264–296).
type Truth struct {
	hazard, dead float64 // λ₀ in 1/s, τ in s
	a, p, b      float64
	rate         float64 // mean rate of events, second order included
	cut          [2]float64
	g            []float64 // g at grid times, in 1
	meanProduct  float64   // m
	gainR, gainC []float64 // g·R and g·C at grid times
	error        float64
}

// grid is the step, in s, of time-domain integrals; responses of a dead time of
// tens of ms have died out after reach seconds.
const (
	grid  = 2.5e-4
	reach = 0.5
)

// Truth derives the closed form.
func (p *PairedDrive) Truth() *Truth {
	s := p.settings
	t := &Truth{hazard: p.hazard, dead: s.DeadTimeMS * 1e-3, a: s.EventDepth, p: s.BurstShare, b: s.BurstDepth, cut: s.BandwidthsHz}
	t.solveResponse()
	r0 := s.EventRateHz
	t.rate = r0 * (1 - t.hazard*t.a*t.a*t.meanProduct/(1+t.hazard*t.dead))
	// Measured on 60 recordings of 256 cells × 300 s, and 30 of 1024, at a = 0.25:
	// rates off by up to 0.8 %, weak cross-talk by up to 2.5 %. What is left out
	// grows as a².
	t.error = 0.005 + 0.16*t.a*t.a
	return t
}

// solveResponse finds g from g + λ₀ β∗g = β by stepping through time, then the
// products that third-order terms need.
func (t *Truth) solveResponse() {
	n := int(reach / grid)
	t.g = make([]float64, n)
	sum := make([]float64, n+1) // sum[i] is the integral of g up to grid point i−1, by trapezoids
	box := int(math.Round(t.dead / grid))
	for i := range n {
		value := 0.0
		if i <= box {
			value = 1
		}
		if i == box {
			value = 0.5
		}
		// ∫_{s−τ}^{s} g, with the newest half step implicit.
		past := sum[i]
		if i > 0 {
			past = sum[i] + 0.5*grid*t.g[i-1]
		}
		if i > box {
			past -= sum[i-box+1]
		}
		if i == 0 {
			t.g[0] = 1
			continue
		}
		t.g[i] = (value - t.hazard*past) / (1 + 0.5*t.hazard*grid)
		sum[i+1] = sum[i] + 0.5*grid*(t.g[i-1]+t.g[i])
	}
	t.meanProduct = t.integrate(func(i int) float64 { return t.g[i] * t.correlation(float64(i)*grid) })
	t.gainR, t.gainC = make([]float64, n), make([]float64, n)
	for i := range n {
		s := float64(i) * grid
		t.gainR[i] = t.g[i] * t.correlation(s)
		if t.g[i] != 0 {
			// C(s) = ∫ g(u) R(s+u) du: x(t) with (g∗x)(t−s).
			t.gainC[i] = t.g[i] * t.integrateEvery(8, func(j int) float64 { return t.g[j] * t.correlation(s+float64(j)*grid) })
		}
	}
}

// correlation of soma, of unit variance and flat to its cut-off.
func (t *Truth) correlation(s float64) float64 {
	x := 2 * math.Pi * t.cut[0] * s
	if math.Abs(x) < 1e-9 {
		return 1
	}
	return math.Sin(x) / x
}

func (t *Truth) integrate(f func(i int) float64) float64 { return t.integrateEvery(1, f) }

// integrateEvery is the trapezoid over every step-th grid point.
func (t *Truth) integrateEvery(step int, f func(i int) float64) float64 {
	sum := 0.5 * f(0)
	for i := step; i < len(t.g); i += step {
		sum += f(i)
	}
	return sum * grid * float64(step)
}

// transform is ∫ x(s) e^{−2πifs} ds of values on the grid.
func transform(x []float64, f float64) complex128 {
	sin, cos := math.Sincos(-2 * math.Pi * f * grid)
	step, phase := complex(cos, sin), complex(1, 0)
	sum := complex(-0.5*x[0], 0)
	for _, v := range x {
		sum += complex(v, 0) * phase
		phase *= step
	}
	return sum * complex(grid, 0)
}

// box is β̂(f), the transform of the dead time's window.
func (t *Truth) box(f float64) complex128 {
	w := 2 * math.Pi * f
	if math.Abs(w*t.dead) < 1e-9 {
		return complex(t.dead, 0)
	}
	sin, cos := math.Sincos(-w * t.dead)
	return (1 - complex(cos, sin)) / complex(0, w)
}

func (t *Truth) d(f float64) complex128 { return 1 + complex(t.hazard, 0)*t.box(f) }

func (t *Truth) response(f float64) complex128 { return t.box(f) / t.d(f) }

// density of stream s: unit variance, flat to the cut-off.
func (t *Truth) density(s int, f float64) float64 {
	if math.Abs(f) > t.cut[s] {
		return 0
	}
	return 1 / (2 * t.cut[s])
}

// gain is H(f), the response of the mean event rate to soma, to third order.
func (t *Truth) gain(f float64) complex128 {
	r0 := t.hazard / (1 + t.hazard*t.dead)
	third := complex(t.meanProduct, 0)*t.response(0) + transform(t.gainR, f)*t.response(f) + transform(t.gainC, f)
	return complex(t.a*r0, 0) / t.d(f) * (1 + complex(t.hazard*t.hazard*t.a*t.a, 0)*third)
}

// quadrature steps of convolution integrals over a stream's band.
const quadrature = 48

// overBand is the midpoint rule of ∫ S_ss(ν) h(ν) dν over stream s's band.
func (t *Truth) overBand(s int, h func(nu float64) float64) float64 {
	sum := 0.0
	step := 2 * t.cut[s] / quadrature
	for i := range quadrature {
		sum += h(-t.cut[s] + (float64(i)+0.5)*step)
	}
	return sum * step / (2 * t.cut[s])
}

// intensity is S_A(f), the spectrum of the event intensity that cells share.
func (t *Truth) intensity(f float64) float64 {
	h := t.gain(f)
	first := (real(h)*real(h) + imag(h)*imag(h)) * t.density(0, f)
	r0 := t.hazard / (1 + t.hazard*t.dead)
	product := t.overBand(0, func(nu float64) float64 {
		s := t.density(0, f-nu)
		if s == 0 {
			return 0
		}
		g, o := t.response(nu), t.response(f-nu)
		return s * (real(g)*real(g) + imag(g)*imag(g) + real(g)*real(o) + imag(g)*imag(o))
	})
	scale := t.hazard * t.a * t.a * r0
	d := t.d(f)
	return first + scale*scale/(real(d)*real(d)+imag(d)*imag(d))*product
}

// renewal is G(f), what a cell's dead time takes from a Poisson spectrum.
func (t *Truth) renewal(f float64) float64 {
	d := t.d(f)
	return t.rate * (1/(real(d)*real(d)+imag(d)*imag(d)) - 1)
}

// sizes are the mean shares q̄ of events of 1, 2, 3, ≥ 4 spikes and their slopes q′.
func (t *Truth) sizes() (mean, slope [4]float64) {
	return [4]float64{1 - t.p, t.p * (1 - tripletPart), t.p * tripletPart, 0}, [4]float64{-1, 1 - tripletPart, tripletPart, 0}
}

// clusters are the mean transforms K of events of each size, and the mean power
// of their spikes.
func clusters(f float64) (mean [4]complex128, power [4]float64) {
	// φ of a uniform interval: phase of its middle times a sinc of its width.
	mid, width := (shortestISI+longestISI)/2, longestISI-shortestISI
	sin, cos := math.Sincos(-2 * math.Pi * f * mid)
	x := math.Pi * f * width
	sinc := 1.0
	if math.Abs(x) > 1e-9 {
		sinc = math.Sin(x) / x
	}
	phi := complex(cos*sinc, sin*sinc)
	mean = [4]complex128{1, 1 + phi, 1 + phi + phi*phi, 0}
	power = [4]float64{1, 2 + 2*real(phi), 3 + 4*real(phi) + 2*real(phi*phi), 0}
	return mean, power
}

// Private is the spectrum of trains i and j that one cell does not share, in 1/s.
func (t *Truth) Private(f float64) (out [5][5]complex128) {
	q, slope := t.sizes()
	g := t.renewal(f)
	smeared := t.overBand(1, func(nu float64) float64 { return t.renewal(f - nu) })
	k, power := clusters(f)
	for i := range 4 {
		for j := range 4 {
			// Between different events; an event with itself follows.
			between := complex(q[i]*q[j]*g+t.b*t.b*slope[i]*slope[j]*smeared, 0)
			out[i][j] += between
			out[4][j] += k[i] * between
			out[j][4] += conj(k[i]) * between
			out[4][4] += k[i] * conj(k[j]) * between
		}
		own := complex(t.rate*q[i], 0)
		out[i][i] += own
		out[4][i] += k[i] * own
		out[i][4] += conj(k[i]) * own
		out[4][4] += complex(power[i], 0) * own
	}
	return out
}

// Shared is the cross-spectrum of train i of one cell with train j of another.
func (t *Truth) Shared(f float64) (out [5][5]complex128) {
	q, slope := t.sizes()
	events := t.intensity(f)
	marks := t.b * t.b * (t.rate*t.rate*t.density(1, f) + t.overBand(1, func(nu float64) float64 { return t.linear(f - nu) }))
	k, _ := clusters(f)
	for i := range 4 {
		for j := range 4 {
			s := complex(q[i]*q[j]*events+slope[i]*slope[j]*marks, 0)
			out[i][j] += s
			out[4][j] += k[i] * s
			out[j][4] += conj(k[i]) * s
			out[4][4] += k[i] * conj(k[j]) * s
		}
	}
	return out
}

// linear is the first-order spectrum of the event intensity, enough under b².
func (t *Truth) linear(f float64) float64 {
	r0 := t.hazard / (1 + t.hazard*t.dead)
	d := t.d(f)
	return t.a * t.a * r0 * r0 * t.density(0, f) / (real(d)*real(d) + imag(d)*imag(d))
}

// Cross is the cross-spectrum of train i with soma and dendrite.
func (t *Truth) Cross(f float64) (out [5][]complex128) {
	q, slope := t.sizes()
	h, sx, sy := t.gain(f), complex(t.density(0, f), 0), complex(t.density(1, f), 0)
	k, _ := clusters(f)
	out[4] = make([]complex128, 2)
	for i := range 4 {
		x, y := complex(q[i], 0)*h*sx, complex(slope[i]*t.b*t.rate, 0)*sy
		out[i] = []complex128{x, y}
		out[4][0] += k[i] * x
		out[4][1] += k[i] * y
	}
	return out
}

// Streams are the spectra of soma and dendrite, which are independent.
func (t *Truth) Streams(f float64) [][]complex128 {
	return [][]complex128{{complex(t.density(0, f), 0), 0}, {0, complex(t.density(1, f), 0)}}
}

// RelativeError is the size, relative to a rate in bits/s, of what the closed form
// leaves out; a code's weak cross-talk about the other stream may be off by twice
// as much.
func (t *Truth) RelativeError() float64 { return t.error }

// BurstShare is p̄, the baseline that the residual subtracts of each event.
func (t *Truth) BurstShare() float64 { return t.p }

func conj(c complex128) complex128 { return complex(real(c), -imag(c)) }
