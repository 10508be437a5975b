package discrete

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"pgregory.net/rapid"
)

// The vector (10, 5, 3, 1, 1), values recomputed with SciPy 1.10; nats.
func TestEntropyOfAKnownVector(t *testing.T) {
	counts := []int64{10, 5, 3, 1, 1}
	for method, want := range map[Method]float64{PlugIn: 1.277288, MillerMadow: 1.377288, Jackknife: 1.432956} {
		got, variance := Entropy(counts, method)
		assert.InDelta(t, want/math.Ln2, got, 1e-6)
		assert.Greater(t, variance, 0.0)
	}
	got, variance := Entropy([]int64{5, 5, 5, 5}, PlugIn)
	assert.InDelta(t, 2, got, 1e-12)
	assert.InDelta(t, 0, variance, 1e-12)
	got, _ = Entropy([]int64{0, 0}, Jackknife)
	assert.Zero(t, got)
	got, _ = Entropy([]int64{1}, Jackknife)
	assert.Zero(t, got)
	assert.Panics(t, func() { Entropy([]int64{-1, 3}, PlugIn) })
	// 10⁹ samples a symbol: nothing cancels away.
	got, _ = Entropy([]int64{1e9, 1e9, 1e9, 1e9}, Jackknife)
	assert.InDelta(t, 2, got, 1e-6)
}

// Leaving each sample out by hand.
func TestJackknifeAgainstLeavingOut(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		counts := rapid.SliceOfN(rapid.Int64Range(0, 9), 1, 7).Draw(t, "counts")
		n := int64(0)
		for _, c := range counts {
			n += c
		}
		if n < 2 {
			return
		}
		full, _ := Entropy(counts, PlugIn)
		sum := 0.0
		for i, c := range counts {
			if c > 0 {
				less := slices.Clone(counts)
				less[i]--
				h, _ := Entropy(less, PlugIn)
				sum += float64(c) * h
			}
		}
		want := float64(n)*full - float64(n-1)/float64(n)*sum
		got, _ := Entropy(counts, Jackknife)
		if math.Abs(got-want) > 1e-9 {
			t.Fatalf("%v: %g, by leaving out %g", counts, got, want)
		}
	})
}

// Cover and Thomas 2006, Elements of Information Theory, example 2.2.1: the joint
// table /32 with H(X) = 7/4, H(Y) = 2, H(X,Y) = 27/8, I = 3/8 bit.
func TestTextbookTable(t *testing.T) {
	joint := FromCounts([][]int64{{4, 2, 1, 1}, {2, 4, 1, 1}, {2, 2, 2, 2}, {8, 0, 0, 0}})
	rows, columns := joint.marginals()
	h := func(c []int64) float64 { v, _ := Entropy(c, PlugIn); return v }
	assert.InDelta(t, 2, h(rows), 1e-12)
	assert.InDelta(t, 7.0/4, h(columns), 1e-12)
	assert.InDelta(t, 27.0/8, h(joint.counts), 1e-12)
	assert.InDelta(t, 3.0/8, Information(joint, PlugIn), 1e-12)
	assert.Equal(t, 2.0, joint.SamplesPerCell())
}

// R̃ = 7 for the vector above with ten possible levels; a 4×4 table of
// independent levels with N = 100 has a predicted bias of .0649213 bit.
func TestPanzeriTreves(t *testing.T) {
	assert.Equal(t, 7.0, relevant([]int64{10, 5, 3, 1, 1, 0, 0, 0, 0, 0}, 10))
	even := NewTable(4, 4)
	for i := range even.counts {
		even.counts[i] = 6
	}
	even.counts[0] += 4
	rows, columns := even.marginals()
	assert.InDelta(t, .0649213, panzeriTreves(even, rows, columns), 1e-7)
}

// Independent levels: the corrected information averages to zero within 4
// standard errors of 2000 tables of 4×4 with 128 samples; the plug-in is off by
// about its predicted .0507 bit.
func TestIndependenceAveragesToZero(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	means := map[Method][]float64{}
	for range 2000 {
		table := NewTable(4, 4)
		for range 128 {
			table.counts[rng.IntN(16)]++
		}
		for _, m := range []Method{PlugIn, MillerMadow, Jackknife, PanzeriTreves} {
			means[m] = append(means[m], Information(table, m))
		}
	}
	stat := func(x []float64) (mean, se float64) {
		for _, v := range x {
			mean += v / float64(len(x))
		}
		for _, v := range x {
			se += (v - mean) * (v - mean)
		}
		return mean, math.Sqrt(se) / float64(len(x))
	}
	mean, se := stat(means[PlugIn])
	assert.InDelta(t, 9/(2*128*math.Ln2), mean, 4*se+0.003, "second-order terms of 1/N²")
	for _, m := range []Method{Jackknife, MillerMadow, PanzeriTreves} {
		mean, se = stat(means[m])
		assert.InDelta(t, 0, mean, 4*se+0.003)
	}
}

// Eight samples a cell of an 8×8 table with a diagonal dependence: the jackknife
// is within 1.5 % of the truth on average (1 % and 4 standard errors), the
// plug-in far off.
func TestJackknifeAtEightSamplesACell(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 2))
	const k = 8
	p := make([]float64, k*k)
	total := 0.0
	for i := range k {
		for j := range k {
			p[i*k+j] = math.Exp(-math.Abs(float64(i-j)) / 1.5)
			total += p[i*k+j]
		}
	}
	truth := 0.0
	row, column := make([]float64, k), make([]float64, k)
	for i := range p {
		p[i] /= total
		row[i/k] += p[i]
		column[i%k] += p[i]
	}
	for i, v := range p {
		truth += v * math.Log2(v/(row[i/k]*column[i%k]))
	}
	plain, jack := 0.0, 0.0
	const runs = 500
	for range runs {
		table := NewTable(k, k)
		for range 8 * k * k {
			u, i := rng.Float64(), 0
			for ; i < len(p)-1 && u >= p[i]; i++ {
				u -= p[i]
			}
			table.counts[i]++
		}
		plain += Information(table, PlugIn) / runs
		jack += Information(table, Jackknife) / runs
	}
	assert.InEpsilon(t, truth, jack, 0.015)
	assert.Greater(t, plain, 1.05*truth)
}

func TestLevels(t *testing.T) {
	x := []float64{5, 1, 4, 2, 3, 6, 8, 7}
	dst := make([]uint8, 8)
	used, edges := Levels(dst, x, 4)
	assert.Equal(t, 4, used)
	assert.Equal(t, []float64{3, 5, 7}, edges)
	assert.Equal(t, []uint8{2, 0, 1, 0, 1, 2, 3, 3}, dst)
	used, _ = Levels(dst[:5], []float64{0, 0, 0, 0, 1}, 4)
	assert.Equal(t, 1, used, "ties do not straddle a level")
	used, _ = Levels(dst[:4], []float64{0, 0, 1, 1}, 4)
	assert.Equal(t, 2, used)
	assert.Panics(t, func() { Levels(dst, x[:3], 4) })
}

func TestTablesAddSubtractAndShift(t *testing.T) {
	rows, columns := []uint8{0, 1, 1, 0, 2}, []uint8{1, 0, 1, 1, 0}
	all, part := NewTable(3, 2), NewTable(3, 2)
	Tabulate(all, rows, columns)
	assert.Equal(t, int64(2), all.Count(0, 1))
	Tabulate(part, rows[:2], columns[:2])
	rest := all.Clone()
	rest.Subtract(part)
	want := NewTable(3, 2)
	Tabulate(want, rows[2:], columns[2:])
	assert.Equal(t, want, rest)
	rest.Add(part)
	assert.Equal(t, all, rest)
	assert.Panics(t, func() { part.Subtract(all) })
	assert.Panics(t, func() { part.Add(NewTable(2, 2)) })
	shifted := NewTable(3, 2)
	TabulateShifted(shifted, rows, columns, 2)
	want.Reset()
	Tabulate(want, rows, []uint8{1, 1, 0, 1, 0})
	assert.Equal(t, want, shifted)
}

func TestInformationDoesNotDependOnOrder(t *testing.T) {
	a := FromCounts([][]int64{{9, 2, 1}, {3, 7, 5}})
	b := FromCounts([][]int64{{5, 3, 7}, {1, 9, 2}})
	for _, m := range []Method{PlugIn, MillerMadow, Jackknife, PanzeriTreves} {
		assert.InDelta(t, Information(a, m), Information(b, m), 1e-12)
	}
}
