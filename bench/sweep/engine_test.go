package sweep

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/estimators"
	"codeassay/estimators/spectral"
	"codeassay/scenarios"
)

var allCodes = []string{"spike-rate", "event-rate", "singlet-rate", "burst-rate", "burst-fraction", "burst-residual", "burst-size"}

func run(t *testing.T, f *fake, study bench.Study, workers int, pairs [][2]int, names ...string) *bench.Outcome {
	t.Helper()
	out, err := Run(context.Background(), Request{Study: study, Codes: codesNamed(names...), Pairs: pairs, Source: f, Workers: workers})
	require.NoError(t, err)
	return out
}

// value is the estimate of a row of the full ensemble.
func value(t *testing.T, out *bench.Outcome, kind bench.RowKind, estimator, stream, code int) float64 {
	t.Helper()
	for _, p := range out.Pieces {
		last := len(p.Sizes) - 1
		if out.Layout.Sizes[p.Sizes[last]] != out.Layout.Cells {
			continue
		}
		for row, key := range out.Layout.Rows {
			if key.Kind == kind && key.Estimator == estimator && key.Stream == stream && (kind != bench.Single && kind != bench.Partial || key.Code == code) {
				return p.Value[last].Full[row]
			}
		}
	}
	require.Fail(t, "no such row")
	return 0
}

// The engine against the plain path: label each train, add counts bin by bin,
// and hand two slices to spectral.Information. Segments fill the recording, so
// both remove the same means; agreement to rounding.
func TestEngineEqualsPlainPath(t *testing.T) {
	f := newFake(fakeSettings{cells: 12, seconds: 65.536, depth: 0.3, markDepth: 0.07, bursts: true, seed: 1})
	study := fakeStudy()
	study.Estimate.Align = false
	study.Estimate.SegmentMS = 2048
	out := run(t, f, study, 2, nil, allCodes...)
	n := len(f.streams[0].Samples)
	trains := make([][6]float64, n)
	rule := decoders.DefaultBurstRule()
	for u := range f.units {
		times := f.trains[u]
		kinds := rule.Label(nil, times)
		bursts, events := 0.0, 0.0
		for _, k := range kinds {
			if k > 0 {
				events++
			}
			if k > 1 {
				bursts++
			}
		}
		for i, k := range kinds {
			at := times[i] / 1e6
			trains[at][0]++
			if k > 0 {
				trains[at][k]++
				trains[at][5] += bursts / events
			}
		}
	}
	signal := func(w [6]float64) []float64 {
		x := make([]float64, n)
		for i := range x {
			for j, v := range w {
				x[i] += v * trains[i][j]
			}
		}
		return x
	}
	for c, code := range codesNamed(allCodes...) {
		if !code.Linear() {
			continue
		}
		for s := range f.streams {
			want, err := spectral.Information(f.streams[s].Samples, signal(code.Trains()), spectral.Options{SampleInterval: 0.001, HighHz: fakeBand, SegmentS: 2.048})
			require.NoError(t, err)
			// Own burst shares are kept to 1/65536: relative 1e-5 of the residual.
			tolerance := 1e-9
			if code.OwnBaseline {
				tolerance = 1e-3
			}
			assert.InDelta(t, want.BitsPerS, value(t, out, bench.Single, 0, s, c), tolerance*math.Max(1, math.Abs(want.BitsPerS)), "%s about %d", code.Name, s)
		}
	}
}

// The same outcome, to the bit, on 1, 2 and 7 workers.
func TestWorkersDoNotMatter(t *testing.T) {
	f := newFake(fakeSettings{cells: 9, seconds: 40, depth: 0.3, markDepth: 0.07, bursts: true, seed: 2})
	study := fakeStudy()
	pairs := [][2]int{{1, 4}}
	one := run(t, f, study, 1, pairs, allCodes...)
	for _, workers := range []int{2, 7} {
		other := run(t, f, study, workers, pairs, allCodes...)
		// Printed in full, since NaN differs from itself.
		assert.True(t, fmt.Sprint(one.Pieces) == fmt.Sprint(other.Pieces), "%d workers", workers)
		assert.True(t, fmt.Sprint(one.Cells, *one.Chance, one.Spectra) == fmt.Sprint(other.Cells, *other.Chance, other.Spectra), "%d workers", workers)
		assert.Equal(t, one.Recording, other.Recording)
		assert.Equal(t, one.Warnings, other.Warnings)
	}
}

// A draw's values do not depend on which other sizes are swept beside it.
func TestSizesAreNestedInADraw(t *testing.T) {
	f := newFake(fakeSettings{cells: 10, seconds: 30, depth: 0.3, bursts: true, seed: 3})
	study := fakeStudy()
	study.Sweep.Cells = []int{4, 8}
	two := run(t, f, study, 2, nil, "event-rate")
	study.Sweep.Cells = []int{4}
	study.Sweep.Draws = 2
	one := run(t, f, study, 2, nil, "event-rate")
	require.Len(t, one.Pieces, 2)
	require.Len(t, two.Pieces, 4)
	assert.Equal(t, one.Pieces[1].Value[0].Full, two.Pieces[1].Value[0].Full)
}

// Streams that lead the spikes by 40 ms are aligned again: the delay is stated
// and the information is that of the aligned recording, up to the bins lost at
// the ends.
func TestDelayIsRemoved(t *testing.T) {
	f := newFake(fakeSettings{cells: 20, seconds: 60, depth: 0.3, markDepth: 0.08, bursts: true, seed: 4})
	study := fakeStudy()
	aligned := run(t, f, study, 2, nil, "event-rate", "burst-fraction")
	for s := range f.streams {
		x := f.streams[s].Samples
		f.streams[s].Samples = slices.Concat(x[40:], make([]float64, 40))
	}
	late := run(t, f, study, 2, nil, "event-rate", "burst-fraction")
	// The dead time gives the response a slight phase: one or two bins.
	assert.InDelta(t, 40, late.DelaysMS[0], 3)
	assert.InDelta(t, 40, late.DelaysMS[1], 3)
	assert.InEpsilon(t, value(t, aligned, bench.Single, 0, 0, 0), value(t, late, bench.Single, 0, 0, 0), 0.01)
	study.Estimate.Align = false
	raw := run(t, f, study, 2, nil, "event-rate", "burst-fraction")
	assert.Equal(t, []float64{0, 0}, raw.DelaysMS)
	// A 2 s segment misaligned by 40 ms loses some 4 % of its coherence (Carter
	// 1980), and more of the information at the band's edge than noise explains.
	assert.Less(t, value(t, raw, bench.Single, 0, 0, 0), value(t, late, bench.Single, 0, 0, 0))
}

// Repeats of one input: time blocks hold every repeat, and the further bias of
// frozen input is corrected, so that the mean over 30 recordings of 8 repeats of
// 20 s is that of fresh input of the same total length, within 4 standard errors.
func TestFrozenRepeatsAreUnbiased(t *testing.T) {
	study := fakeStudy()
	study.Estimate.With = []string{"multitaper"}
	study.Estimate.Align = false
	study.Estimate.SegmentMS = 1024
	study.Sweep.Cells = []int{20}
	mean := func(meaning scenarios.TrialMeaning) (m, se float64) {
		const runs = 30
		sum, sum2 := 0.0, 0.0
		for i := range runs {
			f := newFake(fakeSettings{cells: 20, seconds: 20, depth: 0.35, seed: uint64(100 + i), trials: 8, meaning: meaning})
			v := value(t, run(t, f, study, 2, nil, "event-rate"), bench.Single, 0, 0, 0)
			sum += v
			sum2 += v * v
		}
		m = sum / runs
		return m, math.Sqrt((sum2/runs - m*m) / (runs - 1))
	}
	fresh, se1 := mean(scenarios.Segments)
	frozen, se2 := mean(scenarios.FrozenRepeats)
	assert.InDelta(t, fresh, frozen, 4*math.Hypot(se1, se2))
}

func TestCancelledSweepStops(t *testing.T) {
	f := newFake(fakeSettings{cells: 4, seconds: 20, seed: 5})
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := Run(ctx, Request{Study: fakeStudy(), Codes: codesNamed("event-rate"), Source: f})
	assert.ErrorIs(t, err, context.Canceled)
}

func TestRunRefusesWhatCannotBe(t *testing.T) {
	f := newFake(fakeSettings{cells: 4, seconds: 20, seed: 6})
	try := func(change func(*bench.Study)) error {
		study := fakeStudy()
		change(&study)
		_, err := Run(context.Background(), Request{Study: study, Codes: codesNamed("event-rate"), Source: f})
		return err
	}
	assert.EqualError(t, try(func(s *bench.Study) { s.Sweep.Cells = []int{5} }), "[sweep] cells = [5]: sizes from 1 to the recording's 4 units")
	assert.EqualError(t, try(func(s *bench.Study) { s.Sweep.BandsHz = []bench.Band{{High: 600}} }),
		"[sweep] bands_hz: 600 Hz is above what bins of 1 ms and stream samples of 1 ms carry: at most 500 Hz")
	assert.EqualError(t, try(func(s *bench.Study) { s.Estimate.SegmentMS = 15000 }),
		"the recording holds 1 segments of 15000 bins: at least 2 are needed, 15 for an interval that can be trusted")
	assert.EqualError(t, try(func(s *bench.Study) { s.Estimate.SegmentMS = 5 }), "[estimate] segment_ms = 5: at least 16 (16 bins)")
	assert.ErrorContains(t, try(func(s *bench.Study) { s.Bursts.MaxISIMS = -1 }), "max_isi_ms = -1")
}

// Bands far below what the recording resolves are measured as well as they can
// be, and what cannot be counted is left out and said.
func TestBandsBelowTheRecordingsReach(t *testing.T) {
	f := newFake(fakeSettings{cells: 4, seconds: 30, depth: 0.3, bursts: true, seed: 8})
	for _, hz := range []float64{0.02, 0.001} {
		study := fakeStudy()
		study.Sweep.BandsHz = []bench.Band{{High: hz}}
		out := run(t, f, study, 2, nil, "event-rate", "burst-fraction")
		for _, key := range out.Layout.Rows {
			assert.True(t, out.Layout.Estimators[key.Estimator].Spectral)
		}
		assert.False(t, math.IsNaN(value(t, out, bench.Single, 0, 0, 1)))
		assert.True(t, slices.ContainsFunc(out.Warnings, func(w estimators.Warning) bool { return w.About == "plug-in" }))
	}
	study := fakeStudy()
	study.Sweep.FractionWindowMS = 40000
	_, err := Run(context.Background(), Request{Study: study, Codes: codesNamed("burst-fraction"), Source: f})
	assert.EqualError(t, err, "[sweep] fraction_window_ms = 40000: at most 32767 (32767 bins)")
}

// One cell, no bursts: bursts never change, so they carry exactly nothing.
func TestSilentCodesCarryNothing(t *testing.T) {
	f := newFake(fakeSettings{cells: 1, seconds: 30, seed: 7})
	out := run(t, f, fakeStudy(), 1, nil, "burst-rate", "burst-fraction", "burst-size")
	for c := range 3 {
		for s := range 2 {
			assert.Zero(t, value(t, out, bench.Single, 0, s, c))
		}
	}
}

// Poisson cells without bursts, 256 at 5, 10 and 20 events/s: chance doublets are
// 1−e^(−rθ) of their events, their fraction carries bits about the rate's stream
// (some 4, 13 and 29 bits/s at a depth of about 0.3, found by simulation), and both
// are reported: the expected share, the surrogate's bits, and the warning that the
// data carry no more.
func TestBurstFreeCellsAreRecognised(t *testing.T) {
	study := fakeStudy()
	study.Estimate.With = []string{"multitaper"}
	study.Sweep.Cells = []int{256}
	for _, rate := range []float64{5, 10, 20} {
		f := newFake(fakeSettings{cells: 256, seconds: 100, depth: 0.3, poisson: rate, seed: uint64(rate)})
		out := run(t, f, study, 2, nil, "event-rate", "burst-fraction", "burst-residual")
		expected := 1 - math.Exp(-rate*0.015)
		assert.InEpsilon(t, expected, float64(out.Recording.ChanceBurstFraction), 0.03, "rate %g", rate)
		// The modulated hazard makes pairs a little likelier: E λ² > (E λ)².
		assert.InEpsilon(t, expected, float64(out.Recording.BurstFraction), 0.12, "rate %g", rate)
		for c := 1; c < 3; c++ {
			data := value(t, out, bench.Single, 0, 0, c)
			row := slices.IndexFunc(out.Layout.Rows, func(k bench.RowKey) bool { return k.Kind == bench.Single && k.Stream == 0 && k.Code == c })
			chance := out.Chance.Full[row]
			t.Logf("rate %g code %d: data %.2f surrogate %.2f bits/s", rate, c, data, chance)
			assert.Greater(t, data, 1.0)
			assert.InDelta(t, data, chance, 0.15*data+0.5, "the surrogate carries what chance bursts carry")
			assert.True(t, slices.ContainsFunc(out.Warnings, func(w estimators.Warning) bool {
				return w.About == out.Layout.Codes[c].Name && strings.Contains(w.Text, "may be the event rate alone")
			}), "rate %g code %d", rate, c)
		}
	}
}
