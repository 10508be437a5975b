package synthetic

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Truth derives the closed form of the package's documentation for the settings.
// Hazard and burst share enter by their mean and by the slope of their regression
// on the stream, both after the cut-off of the hazard at 0 and of the share at 0
// and 1 (Bussgang 1952, MIT RLE Technical Report 216).
func (p *PairedDrive) Truth() *Truth {
	s := p.settings
	hazard, depth := clipped(1, s.EventDepth, 0, s.ceiling())
	share, slope := clipped(s.BurstShare, s.BurstDepth, 0, 1)
	events := newDeadTime(p.hazard*hazard, s.DeadTimeMS*1e-3, depth/hazard, flatBand(s.BandwidthsHz[0]))
	return &Truth{
		kind:   "first-order",
		error:  p.neglected(events),
		events: events,
		sizes: sizes{
			mean:  [4]float64{1 - share, share * (1 - tripletPart), share * tripletPart},
			slope: [4]float64{-slope, slope * (1 - tripletPart), slope * tripletPart},
		},
		isi:   interval{shortestISI, longestISI},
		bands: [2]flatBand{flatBand(s.BandwidthsHz[0]), flatBand(s.BandwidthsHz[1])},
	}
}

// clipped is the mean of mean + sd z between low and high, z being standard normal,
// and the slope of its regression on z.
func clipped(mean, sd, low, high float64) (clippedMean, slope float64) {
	z := distuv.UnitNormal
	a, b := (low-mean)/sd, (high-mean)/sd
	within := z.CDF(b) - z.CDF(a)
	return low*z.CDF(a) + high*z.Survival(b) + mean*within + sd*(z.Prob(a)-z.Prob(b)), sd * within
}

// neglected is the relative error of a rate in bits/s that the closed form may
// make: a rate is off by no more than its signal-to-noise ratio. A stream slow
// against the dead time is where the expansions are worst, and there the response
// is known at any depth: events come at r = λ/(1 + λτ), with a private spectrum
// λ/(1 + λτ)³ at f = 0. Shared noise counts by its part in the noise of all cells
// where that is largest, in the event rate, whose own rate goes with the logarithm.
// To this come the streams, which hold their value for a sample: that smooths
// spikes after the first, in bins of the same width, by sinc² at most.
func (p *PairedDrive) neglected(e *deadTime) float64 {
	s := p.settings
	var rate, square, gain, private float64
	const step = 0.01
	for z := -8.0; z <= 8; z += step {
		hazard := p.hazard * math.Min(math.Max(0, 1+s.EventDepth*z), s.ceiling())
		alive := 1 / (1 + hazard*e.dead)
		weight, r := step*distuv.UnitNormal.Prob(z), hazard*alive
		rate, square = rate+weight*r, square+weight*r*r
		gain += weight * z * r
		private += weight * r * alive * alive
	}
	const still = 1e-3 // Hz
	const faint = 0.01 // whose fourth power is lost in rounding
	slow := newDeadTime(e.hazard, e.dead, e.depth, still)
	out := math.Abs((slow.rate()+slow.excess(0))/private - 1)
	if s.EventDepth > faint {
		out += 2 * math.Abs(real(slow.gain(0))/gain-1)
		shared := square - rate*rate - gain*gain
		noise := e.nonlinear(0) + (e.rate()+e.excess(0))/float64(s.Cells)
		snr := abs2(e.gain(0)) * e.band.density(0) / noise
		// The product of slow streams has a triangular spectrum: its variance is
		// 2·band times the peak.
		out += e.nonlinear(0) / noise * snr / (1 + snr) / math.Log1p(snr) * math.Abs(slow.nonlinear(0)*2*still/shared-1)
	}
	held := math.Pi * math.Max(s.BandwidthsHz[0], s.BandwidthsHz[1]) * sampleInterval
	return out + s.BurstShare*held*held/9
}
