package synthetic

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"gonum.org/v1/gonum/dsp/fourier"
)

// expectation is the intensity of a cell's events given soma, the mean over each
// sample in 1/s: A = λ(1 − ∫_{t−τ}^t A) stepped through time at the middles of
// samples, the dead time being a whole number of them. Soma repeats, and so does
// what is returned.
func expectation(p *PairedDrive) []float64 {
	soma, window := p.streams[0].Samples, int(p.settings.DeadTimeMS)
	n := len(soma)
	count := make([]float64, n+n/2) // of events, expected in each sample
	past := 0.0                     // of the last window−1 samples
	for i := range count {
		hazard := p.hazard * math.Max(0, 1+p.settings.EventDepth*soma[i%n]) * sampleInterval
		oldest := 0.0
		if i >= window {
			oldest = count[i-window]
		}
		// Half of the oldest sample and half of this one lie in the dead time.
		count[i] = hazard * (1 - past - oldest/2) / (1 + hazard/2)
		past += count[i]
		if i >= window-1 {
			past -= count[i-window+1]
		}
	}
	out := make([]float64, n)
	for i, c := range count[n/2:] {
		out[(i+n/2)%n] = c / sampleInterval
	}
	return out
}

// What cells share, from the integral equation solved in time along 600 s of a drawn
// stream, which repeats, so that its transform does not leak: the gain in quarters
// of the band, and the spectrum of what does not follow soma in quarters of twice
// the band. Limits are 4.5 standard errors (32 numbers: any is beyond with
// probability 2e-4) and, of the gain, the truth's own error; of the noise the
// relative a² of the next order.
func TestSharedSpectraAgainstIntegralEquation(t *testing.T) {
	for name, s := range simulated {
		s.Cells, s.DurationS = 1, 600
		p := drive(t, s)
		e := p.Truth().events.(*deadTime)
		n := len(p.streams[0].Samples)
		plan := fourier.NewFFT(n)
		intensity, soma := plan.Coefficients(nil, expectation(p)), plan.Coefficients(nil, p.streams[0].Samples)
		// The second-order shift of the mean rate is up to 1.5 %; it scatters with
		// the variance of 2·band·T numbers.
		assert.InEpsilon(t, e.rate(), real(intensity[0])/float64(n), 5e-4, name)

		for part := range 4 {
			quarter := float64(e.band) / 4 * s.DurationS
			var along complex128
			var power, noise, truth float64
			for k := int(float64(part)*quarter) + 1; k <= int(float64(part+1)*quarter); k++ {
				h := e.gain(float64(k) / s.DurationS)
				along += intensity[k] * conj(soma[k]) / h
				power += abs2(soma[k])
				noise += abs2(intensity[k]/h - soma[k])
			}
			limit := 4.5*math.Sqrt(noise/power/quarter) + p.Truth().RelativeError()
			assert.InDelta(t, 0, cmplx.Abs(along/complex(power, 0)-1), limit, "%s: gain, quarter %d", name, part)

			noise = 0
			for k := int(float64(part)*2*quarter) + 1; k <= int(float64(part+1)*2*quarter); k++ {
				f := float64(k) / s.DurationS
				rest := intensity[k]
				if part < 2 {
					rest -= e.gain(f) * soma[k]
				}
				noise += abs2(rest) * sampleInterval * sampleInterval / s.DurationS
				truth += e.nonlinear(f)
			}
			limit = 4.5/math.Sqrt(2*quarter) + e.depth*e.depth
			assert.InDelta(t, 1, noise/truth, limit, "%s: shared noise, quarter %d", name, part)
		}
	}
}
