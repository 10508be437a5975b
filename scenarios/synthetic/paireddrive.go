package synthetic

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"

	"gonum.org/v1/gonum/dsp/fourier"

	"codeassay/estimators"
	"codeassay/estimators/seed"
	"codeassay/scenarios"
)

// Settings of the scenario paired-drive. Zero values stand for the defaults.
type Settings struct {
	Cells        int        // 1024
	DurationS    float64    // 300
	EventRateHz  float64    // events a second of each cell at rest; 6
	EventDepth   float64    // relative modulation of the hazard by one standard deviation of soma; 0.25
	BurstShare   float64    // share of events that are bursts; 0.3
	BurstDepth   float64    // change of that share by one standard deviation of dendrite; 0.09
	DeadTimeMS   float64    // after each event; 30
	BandwidthsHz [2]float64 // cut-offs of soma and dendrite; 20, 20
	Seed         seed.Seed
}

// In-burst intervals are uniform between these limits, in s: well below 15 ms, as
// is common practice to find (no source). Nine bursts in ten are doublets, the
// rest triplets (common practice, no source).
const (
	shortestISI = 0.003
	longestISI  = 0.007
	tripletPart = 0.1
)

// sampleInterval of the streams, in s.
const sampleInterval = 0.001

func (s Settings) withDefaults() Settings {
	def := func(v *float64, d float64) {
		if *v == 0 {
			*v = d
		}
	}
	if s.Cells == 0 {
		s.Cells = 1024
	}
	def(&s.DurationS, 300)
	def(&s.EventRateHz, 6)
	def(&s.EventDepth, 0.25)
	def(&s.BurstShare, 0.3)
	def(&s.BurstDepth, 0.09)
	def(&s.DeadTimeMS, 30)
	def(&s.BandwidthsHz[0], 20)
	def(&s.BandwidthsHz[1], 20)
	return s
}

// ceiling is the highest hazard relative to rest: that of 5 standard deviations
// of soma.
func (s Settings) ceiling() float64 { return 1 + 5*s.EventDepth }

// validate returns an error for settings outside the range of the closed form: its
// own error is 0.1 % at the defaults, up to 3.2 % where all limits meet (1024 cells).
func (s Settings) validate() error {
	switch {
	case s.Cells < 1:
		return fmt.Errorf("cells = %d: at least 1", s.Cells)
	case !(s.DurationS >= 1):
		return fmt.Errorf("duration_s = %g: at least 1", s.DurationS)
	case !(s.EventRateHz > 0) || s.EventRateHz*s.DeadTimeMS*1e-3 > 0.4:
		return fmt.Errorf("event_rate_hz = %g: above 0, and with a dead time of %g ms at most %.3g, so that cells are dead less than 40 %% of the time", s.EventRateHz, s.DeadTimeMS, 400/s.DeadTimeMS)
	case !(s.EventDepth >= 0 && s.EventDepth <= 0.3):
		return fmt.Errorf("event_depth = %g: from 0 to 0.3; beyond, the hazard would be cut off at zero too often for the closed form", s.EventDepth)
	case !(s.BurstShare > 0 && s.BurstShare < 1):
		return fmt.Errorf("burst_share = %g: between 0 and 1", s.BurstShare)
	case !(s.BurstDepth >= 0 && 3*s.BurstDepth <= math.Min(s.BurstShare, 1-s.BurstShare)+1e-12):
		return fmt.Errorf("burst_depth = %g: from 0 to a third of the distance of burst_share = %g to 0 and 1; beyond, the share would be cut off too often for the closed form", s.BurstDepth, s.BurstShare)
	case !(s.DeadTimeMS >= 1e3*2*longestISI+15 && s.DeadTimeMS <= 100):
		return fmt.Errorf("dead_time_ms = %g: from %g, so that bursts stay apart by more than 15 ms, to 100", s.DeadTimeMS, 1e3*2*longestISI+15)
	}
	for i, hz := range s.BandwidthsHz {
		if !(hz > 0 && hz <= 200) {
			return fmt.Errorf("bandwidths_hz = %g (stream %d): above 0, at most 200", hz, i+1)
		}
	}
	return nil
}

// PairedDrive is an ensemble with two drives: events with a dead time, whose
// hazard follows the stream soma, each a burst with a probability that follows
// the stream dendrite. It is read-only and safe for concurrent use.
type PairedDrive struct {
	settings Settings
	hazard   float64 // of an event outside the dead time, at rest, in 1/s
	streams  []scenarios.Stream
	units    []scenarios.Unit
	trials   []scenarios.Trial
}

// NewPairedDrive draws the streams. Errors name the setting and its range.
func NewPairedDrive(s Settings) (*PairedDrive, error) {
	s = s.withDefaults()
	if err := s.validate(); err != nil {
		return nil, err
	}
	n := int(math.Round(s.DurationS / sampleInterval))
	p := &PairedDrive{settings: s, hazard: s.EventRateHz / (1 - s.EventRateHz*s.DeadTimeMS*1e-3)}
	for i, name := range []string{"soma", "dendrite"} {
		p.streams = append(p.streams, scenarios.Stream{Name: name, BandHz: s.BandwidthsHz[i],
			Samples: flatNoise(s.Seed.Child("stream", i).Rand(), n, s.BandwidthsHz[i])})
	}
	for u := range s.Cells {
		p.units = append(p.units, scenarios.NewUnit(strconv.Itoa(u)))
	}
	p.trials = []scenarios.Trial{{Duration: int64(n) * int64(math.Round(sampleInterval*1e9)), Samples: n}}
	return p, nil
}

// flatNoise is Gaussian noise of unit variance, flat from 0 to the cut-off: the
// first n samples of a period that is quick to transform.
func flatNoise(rng *rand.Rand, n int, cutoff float64) []float64 {
	period := smoothLength(n)
	c := make([]complex128, period/2+1)
	bins := max(1, int(cutoff*float64(period)*sampleInterval))
	// x is Σ 2 Re(c_k e^{…}), of variance 2 Σ |c_k|².
	scale := complex(math.Sqrt(0.25/float64(bins)), 0)
	for k := 1; k <= bins; k++ {
		c[k] = scale * complex(rng.NormFloat64(), rng.NormFloat64())
	}
	return fourier.NewFFT(period).Sequence(nil, c)[:n:n]
}

// smoothLength is the least number from n on without a prime factor above 5.
func smoothLength(n int) int {
	for ; ; n++ {
		rest := n
		for _, factor := range []int{2, 3, 5} {
			for rest%factor == 0 {
				rest /= factor
			}
		}
		if rest == 1 {
			return n
		}
	}
}

// Settings in force, defaults included.
func (p *PairedDrive) Settings() Settings { return p.settings }

// Streams are soma and dendrite.
func (p *PairedDrive) Streams() []scenarios.Stream { return p.streams }

// StreamSamples are the samples of a stream; there is one trial.
func (p *PairedDrive) StreamSamples(stream, _ int) []float64 { return p.streams[stream].Samples }

// Dt is the streams' sample interval in s.
func (p *PairedDrive) Dt() float64 { return sampleInterval }

// Units are the cells, named by number.
func (p *PairedDrive) Units() []scenarios.Unit { return p.units }

// Trials is the one stretch.
func (p *PairedDrive) Trials() []scenarios.Trial { return p.trials }

// Meaning is one uninterrupted stretch.
func (p *PairedDrive) Meaning() scenarios.TrialMeaning { return scenarios.OneTrial }

// Labels are none: bursts are found by the rule.
func (p *PairedDrive) Labels(_, _ int) []scenarios.EventLabel { return nil }

// Notes are none.
func (p *PairedDrive) Notes() []estimators.Warning { return nil }

// Train generates the spikes of a cell, in ns, into dst, which is grown as
// needed. Calls with the same unit give the same spikes.
//
// Candidate events come at the highest hazard that the stream reaches and are
// kept with the ratio of the hazard at the time (thinning: Lewis and Shedler
// 1979, Nav. Res. Logist. Q. 26:403–413); candidates in the dead time are none.
func (p *PairedDrive) Train(dst []int64, unit, _ int) []int64 {
	rng := p.settings.Seed.Child("cell", unit).Rand()
	soma, dendrite := p.streams[0].Samples, p.streams[1].Samples
	end := p.trials[0].Duration
	dead := int64(p.settings.DeadTimeMS * 1e6)
	step := int64(math.Round(sampleInterval * 1e9))
	ceiling := p.settings.ceiling()
	mean := 1e9 / (p.hazard * ceiling)
	dst = dst[:0]
	for t := int64(rng.ExpFloat64() * mean); t < end; t += int64(rng.ExpFloat64() * mean) {
		i := t / step
		if rng.Float64()*ceiling >= 1+p.settings.EventDepth*soma[i] {
			continue
		}
		dst = append(dst, t)
		if rng.Float64() < p.settings.BurstShare+p.settings.BurstDepth*dendrite[i] {
			extra := 1
			if rng.Float64() < tripletPart {
				extra = 2
			}
			s := t
			for range extra {
				if s += int64(1e9 * (shortestISI + (longestISI-shortestISI)*rng.Float64())); s < end {
					dst = append(dst, s)
				}
			}
		}
		t += dead
	}
	return dst
}

// Record materialises the ensemble as a recording.
func (p *PairedDrive) Record() (*scenarios.Recording, error) {
	spec := scenarios.Spec{Streams: p.streams, Dt: sampleInterval, UnitCount: len(p.units)}
	for u := range p.units {
		spikes := p.Train(nil, u, 0)
		if len(spikes) == 0 {
			continue
		}
		spec.Batches = append(spec.Batches, scenarios.SpikeBatch{
			Keys:  []scenarios.SpikeKey{{Unit: p.units[u].Name, Trial: scenarios.NoTrial}},
			Runs:  []scenarios.SpikeRun{{Key: 0, Count: uint32(len(spikes))}},
			Times: spikes,
		})
	}
	return scenarios.New(spec)
}
