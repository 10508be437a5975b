package sweep

import (
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/dsp/fourier"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/estimators"
	"codeassay/scenarios"
)

// fake is a small ensemble made for the tests: events with a dead time of 30 ms
// whose rate follows stream a, and marks whose probability follows stream b.
type fake struct {
	streams []scenarios.Stream
	units   []scenarios.Unit
	trains  [][]int64
	trials  []scenarios.Trial
	meaning scenarios.TrialMeaning
}

func (f *fake) Units() []scenarios.Unit                       { return f.units }
func (f *fake) Trials() []scenarios.Trial                     { return f.trials }
func (f *fake) Train(_ []int64, unit, trial int) []int64      { return f.trains[unit*len(f.trials)+trial] }
func (f *fake) Labels(unit, trial int) []scenarios.EventLabel { return nil }
func (f *fake) Streams() []scenarios.Stream                   { return f.streams }
func (f *fake) Notes() []estimators.Warning                   { return nil }
func (f *fake) Dt() float64                                   { return 0.001 }
func (f *fake) Meaning() scenarios.TrialMeaning               { return f.meaning }
func (f *fake) StreamSamples(s, trial int) []float64 {
	n := f.trials[0].Samples
	if f.meaning == scenarios.FrozenRepeats {
		trial = 0
	}
	return f.streams[s].Samples[trial*n : (trial+1)*n]
}

type fakeSettings struct {
	cells            int
	seconds          float64
	depth, markDepth float64
	bursts           bool
	seed             uint64
	trials           int
	meaning          scenarios.TrialMeaning
	poisson          float64 // events/s of cells without dead time; 0: the usual ones
}

const (
	fakeRate = 8.0
	fakeDead = 0.03
	fakeMark = 0.25
	fakeBand = 20.0
)

func newFake(o fakeSettings) *fake {
	rng := rand.New(rand.NewPCG(o.seed, 1))
	n := int(o.seconds * 1000)
	trials := max(1, o.trials)
	f := &fake{meaning: scenarios.OneTrial}
	if o.meaning != "" {
		f.meaning = o.meaning
	}
	for range trials {
		f.trials = append(f.trials, scenarios.Trial{Duration: int64(n) * 1e6, Samples: n})
	}
	distinct := trials
	if f.meaning == scenarios.FrozenRepeats {
		distinct = 1
	}
	a, b := flatNoise(rng, n*distinct, fakeBand), flatNoise(rng, n*distinct, fakeBand)
	f.streams = []scenarios.Stream{{Name: "a", Samples: a, BandHz: fakeBand}, {Name: "b", Samples: b, BandHz: fakeBand}}
	hazard, dead := fakeRate/(1-fakeRate*fakeDead), fakeDead
	if o.poisson > 0 {
		hazard, dead = o.poisson, 0
	}
	for u := range o.cells {
		f.units = append(f.units, scenarios.Unit{Name: string(rune('A'+u%26)) + string(rune('0'+u/26)), MaxISI: -1, FirstISI: -1, MinSilence: -1})
		for r := range trials {
			offset := r % distinct * n
			var train []int64
			top := hazard * (1 + 5*o.depth)
			for t := rng.ExpFloat64() / top; t < o.seconds; t += rng.ExpFloat64() / top {
				i := offset + min(int(t*1000), n-1)
				if rng.Float64()*top > hazard*(1+o.depth*a[i]) {
					continue
				}
				train = append(train, int64(t*1e9))
				if o.bursts && rng.Float64() < fakeMark+o.markDepth*b[i] && t+0.005 < o.seconds {
					train = append(train, int64((t+0.005)*1e9))
				}
				t += dead
			}
			f.trains = append(f.trains, train)
		}
	}
	return f
}

// flatNoise is Gaussian noise of unit variance, flat below fc, sampled at 1 kHz.
func flatNoise(rng *rand.Rand, n int, fc float64) []float64 {
	c := make([]complex128, n/2+1)
	bins := int(fc * float64(n) / 1000)
	// x is Σ 2 Re(c_k e^{…}), of variance 2 Σ |c_k|².
	scale := complex(math.Sqrt(0.25/float64(bins)), 0)
	for k := 1; k <= bins; k++ {
		c[k] = scale * complex(rng.NormFloat64(), rng.NormFloat64())
	}
	return fourier.NewFFT(n).Sequence(nil, c)
}

func fakeStudy() bench.Study {
	var s bench.Study
	s.Seed = 3
	s.Bursts = bench.BurstsPart{MaxISIMS: 15, MinSpikes: 2}
	s.Sweep = bench.SweepPart{Draws: 4, BinMS: 1, FractionPrior: 16}
	s.Estimate = bench.EstimatePart{With: []string{"multitaper", "welch", "plug-in"}, Overlap: 0.5, Window: "hann", Align: true, Confidence: 0.95}
	return s
}

func codesNamed(names ...string) []decoders.Code {
	var out []decoders.Code
	for _, name := range names {
		i := slices.IndexFunc(decoders.BuiltIn(), func(c decoders.Code) bool { return c.Name == name })
		out = append(out, decoders.BuiltIn()[i])
	}
	return out
}
