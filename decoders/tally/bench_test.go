package tally

import (
	"context"
	"math/rand/v2"
	"sync"
	"testing"

	"codeassay/scenarios"
)

// large is 4000 cells × 600 s with 18 million irregular spikes: large enough
// that no branch predictor learns it by heart.
var large = sync.OnceValue(func() *fake {
	rng := rand.New(rand.NewPCG(12, 34))
	f := &fake{trials: []scenarios.Trial{{Duration: 600_000 * ms}}}
	for range 4000 {
		f.units = append(f.units, scenarios.Unit{})
		var train []int64
		for t := rng.Float64() * 1e9; t < 599e9; t += 20e6 + rng.ExpFloat64()*150e6 {
			train = append(train, int64(t))
			if rng.Float64() < 0.3 {
				train = append(train, int64(t)+4*ms)
			}
		}
		f.trains = append(f.trains, train)
	}
	return f
})

func largeSpans() []Span {
	var spans []Span
	for i := range 32 {
		first, end := i*600_000/32, (i+1)*600_000/32
		spans = append(spans, Span{0, first, end - first})
	}
	return spans
}

func perSpike(b *testing.B, s *Store, spans int) {
	n := 0
	for _, blk := range s.blocks[:spans] {
		n += len(blk.spikes)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(n), "ns/spike")
}

func BenchmarkBuild(b *testing.B) {
	f := large()
	rules := defaultRules(len(f.units))
	for b.Loop() {
		if _, err := Build(context.Background(), f, rules, largeSpans(), Options{BinNs: ms, HaloBins: 20, Workers: 2}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkAdd(b *testing.B) {
	f := large()
	s := build(b, f, defaultRules(len(f.units)), largeSpans(), Options{BinNs: ms, HaloBins: 20, Workers: 2})
	a := s.NewAccumulator()
	order := rand.New(rand.NewPCG(1, 1)).Perm(len(f.units))
	for b.Loop() {
		for span := range 8 {
			a.Reset(span)
			for _, u := range order {
				a.Add(u)
			}
		}
	}
	perSpike(b, s, 8)
}

func BenchmarkBurstFree(b *testing.B) {
	f := large()
	rules := defaultRules(len(f.units))
	s := build(b, f, rules, largeSpans(), Options{BinNs: ms, HaloBins: 20, Workers: 2})
	a := s.NewAccumulator()
	rng := rand.New(rand.NewPCG(1, 1))
	for b.Loop() {
		s.BurstFree(a, 3, rng, rules)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(a.free.owners)), "ns/event")
}

func BenchmarkRead(b *testing.B) {
	f := large()
	s := build(b, f, defaultRules(len(f.units)), largeSpans(), Options{BinNs: ms, HaloBins: 20, Workers: 2})
	a := s.NewAccumulator()
	a.Reset(0)
	for u := range f.units {
		a.Add(u)
	}
	dst := make([]float64, s.spans[0].Bins)
	for _, c := range []struct {
		name string
		read func()
	}{
		{"spikes", func() { a.Linear(dst, [6]float64{1}) }},
		{"events", func() { a.Linear(dst, [6]float64{0, 1, 1, 1, 1}) }},
		{"residual", func() { a.Linear(dst, [6]float64{0, 0, 1, 1, 1, -1}) }},
		{"fractional weights", func() { a.Linear(dst, [6]float64{0, 0.5, 1, 1, 1, -1}) }},
		{"burst fraction", func() { a.Ratio(dst, allBursts, allEvents, 20, 16, 0.3) }},
		{"fractional ratio", func() { a.Ratio(dst, odd, allEvents, 20, 16, 0.3) }},
		{"windows", func() { a.Windows(dst[:len(dst)/25], 25, allBursts) }},
	} {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				c.read()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(dst)), "ns/bin")
		})
	}
}
