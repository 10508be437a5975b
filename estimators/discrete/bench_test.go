package discrete

import (
	"math/rand/v2"
	"testing"
)

// A slow stream against a response: levels stay for several samples.
func slowLevels(n, levels int, seed uint64) []uint8 {
	rng := rand.New(rand.NewPCG(seed, 1))
	out := make([]uint8, n)
	for i := range out {
		if i > 0 && rng.IntN(8) > 0 {
			out[i] = out[i-1]
		} else {
			out[i] = uint8(rng.IntN(levels))
		}
	}
	return out
}

func BenchmarkTabulateShifted(b *testing.B) {
	const n = 24000
	rows, columns := slowLevels(n, 8, 1), slowLevels(n, 8, 2)
	t := NewTable(8, 8)
	b.SetBytes(n) // 1000 MB/s is 1 ns an item
	for i := 0; b.Loop(); i++ {
		t.Reset()
		TabulateShifted(t, rows, columns, 100+i)
	}
}

func BenchmarkLevels(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 2))
	normal, counts := make([]float64, 24000), make([]float64, 24000)
	for i := range normal {
		normal[i] = rng.NormFloat64()
		counts[i] = float64(rng.IntN(12) + rng.IntN(12))
	}
	dst := make([]uint8, len(normal))
	for name, x := range map[string][]float64{"normal": normal, "counts": counts} {
		b.Run(name, func(b *testing.B) {
			b.SetBytes(int64(len(x)))
			for b.Loop() {
				Levels(dst, x, 8)
			}
		})
	}
}

func BenchmarkInformation(b *testing.B) {
	t := NewTable(8, 8)
	Tabulate(t, slowLevels(24000, 8, 1), slowLevels(24000, 8, 2))
	for _, m := range Methods() {
		b.Run(m.String(), func(b *testing.B) {
			for b.Loop() {
				Information(t, m)
			}
		})
	}
}
