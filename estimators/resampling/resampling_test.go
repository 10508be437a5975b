package resampling

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"
)

// Mean of 1…6 in three pairs: variance 4/3 (arithmetic).
func TestJackknifeOfAMean(t *testing.T) {
	deleted := []float64{(3 + 4 + 5 + 6) / 4.0, (1 + 2 + 5 + 6) / 4.0, (1 + 2 + 3 + 4) / 4.0}
	v, c := Jackknife(3.5, deleted, nil)
	assert.InDelta(t, 4.0/3, v, 1e-12)
	assert.InDelta(t, 3.5, c, 1e-12)
	v, c = Jackknife(3.5, deleted, []float64{2, 2, 2})
	assert.InDelta(t, 4.0/3, v, 1e-12, "equal weights are the same as none")
	assert.InDelta(t, 3.5, c, 1e-12)
}

// With unequal groups the variance of a mean of independent values must stay
// unbiased: 3000 simulations, within 4 standard errors.
func TestJackknifeUnequalGroups(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	sizes := []float64{5, 9, 2, 7, 7, 4}
	sum, sum2 := 0.0, 0.0
	const runs = 3000
	for range runs {
		var groups []float64
		total, n := 0.0, 0.0
		for _, m := range sizes {
			s := 0.0
			for range int(m) {
				s += rng.NormFloat64()
			}
			groups = append(groups, s)
			total += s
			n += m
		}
		var deleted []float64
		for i, s := range groups {
			deleted = append(deleted, (total-s)/(n-sizes[i]))
		}
		v, _ := Jackknife(total/n, deleted, sizes)
		sum += v
		sum2 += v * v
	}
	mean := sum / runs
	assert.InDelta(t, 1.0/34, mean, 4*math.Sqrt((sum2/runs-mean*mean)/runs))
	assert.Panics(t, func() { Jackknife(1, []float64{1}, nil) })
	assert.Panics(t, func() { Jackknife(1, []float64{1, 2}, []float64{1}) })
	assert.Panics(t, func() { Jackknife(1, []float64{1, 2}, []float64{1, 0}) })
}

// A bias of order 1/N, that of the variance with divisor N, is removed whole.
func TestJackknifeRemovesBiasOfOrderOneOverN(t *testing.T) {
	x := []float64{2, 7, 1, 8, 2, 8, 1, 8, 2, 8}
	spread := func(x []float64) (v float64) {
		mean := 0.0
		for _, a := range x {
			mean += a / float64(len(x))
		}
		for _, a := range x {
			v += (a - mean) * (a - mean) / float64(len(x))
		}
		return v
	}
	var deleted []float64
	for i := range x {
		deleted = append(deleted, spread(slices.Delete(slices.Clone(x), i, i+1)))
	}
	_, corrected := Jackknife(spread(x), deleted, nil)
	assert.InDelta(t, spread(x)*10/9, corrected, 1e-12)
	_, corrected = Jackknife(spread(x), deleted, []float64{3, 3, 3, 3, 3, 3, 3, 3, 3, 3})
	assert.InDelta(t, spread(x)*10/9, corrected, 1e-12)
}

func TestTInterval(t *testing.T) {
	low, high := TInterval(10, 4, 9, 0.95) // t₉ .975 = 2.262157 (tables)
	assert.InDelta(t, 10-2*2.262157, low, 1e-5)
	assert.InDelta(t, 10+2*2.262157, high, 1e-5)
	low, high = TInterval(10, 0, 9, 0.95)
	assert.Equal(t, [2]float64{10, 10}, [2]float64{low, high})
	assert.Panics(t, func() { TInterval(10, -1, 9, 0.95) })
	assert.Panics(t, func() { TInterval(10, 1, 0, 0.95) })
	assert.Panics(t, func() { TInterval(10, 1, 9, 95) })
}

// Künsch 1989 on (1, 2, 3, 10) with blocks of 2: a resample's mean is that of two
// of the block means 1.5, 2.5, 6.5, so their mean is 3.5, their variance 7/3 and
// their fourth central moment (2⁴+1⁴+3⁴)/3/8 + 6 (14/3)²/16 = 12.25. 4 standard
// errors over 20 000 resamples.
func TestMovingBlocks(t *testing.T) {
	x := []float64{1, 2, 3, 10}
	mean := func(s []float64) float64 { return (s[0] + s[1] + s[2] + s[3]) / 4 }
	const runs = 20000
	draws := MovingBlocks(rand.New(rand.NewPCG(2, 2)), x, 2, runs, mean)
	m, v := 0.0, 0.0
	for _, d := range draws {
		m += d / runs
	}
	for _, d := range draws {
		v += (d - m) * (d - m) / runs
	}
	assert.InDelta(t, 3.5, m, 4*math.Sqrt(7.0/3/runs))
	assert.InDelta(t, 7.0/3, v, 4*math.Sqrt((12.25-49.0/9)/runs))
	assert.Equal(t, []float64{1, 2, 3, 10}, x)
	whole := MovingBlocks(rand.New(rand.NewPCG(2, 2)), x, 4, 3, mean)
	assert.Equal(t, []float64{4, 4, 4}, whole)
	assert.Panics(t, func() { MovingBlocks(rand.New(rand.NewPCG(2, 2)), x, 5, 3, mean) })
}

// The worked example of Benjamini and Hochberg 1995 (15 p-values): BH rejects 4,
// Holm 3; adjusted 4th .035625 and .114, as R 4.2 p.adjust gives.
func TestAdjustments(t *testing.T) {
	p := []float64{.0001, .0004, .0019, .0095, .0201, .0278, .0298, .0344, .0459, .3240, .4262, .5719, .6528, .7590, 1}
	shuffled := slices.Clone(p)
	rand.New(rand.NewPCG(3, 3)).Shuffle(len(shuffled), func(i, j int) { shuffled[i], shuffled[j] = shuffled[j], shuffled[i] })
	bh, holm := BenjaminiHochberg(shuffled), Holm(shuffled)
	at := slices.Index(shuffled, .0095)
	assert.InDelta(t, .035625, bh[at], 1e-12)
	assert.InDelta(t, .114, holm[at], 1e-12)
	count := func(q []float64) (n int) {
		for _, v := range q {
			if v <= .05 {
				n++
			}
		}
		return n
	}
	assert.Equal(t, 4, count(bh))
	assert.Equal(t, 3, count(holm))
	assert.Empty(t, Holm(nil))
	assert.Panics(t, func() { Holm([]float64{.1, math.NaN()}) })
	assert.Panics(t, func() { BenjaminiHochberg([]float64{math.NaN()}) })
}

// Piepho 2004: pairs 1–3, 1–4, 2–4 differ: a, ab, bc, c.
func TestLettersWorkedExample(t *testing.T) {
	differ := map[[2]int]bool{{0, 2}: true, {0, 3}: true, {1, 3}: true}
	got := Letters(4, func(i, j int) bool { return differ[[2]int{min(i, j), max(i, j)}] })
	assert.Equal(t, []string{"a", "ab", "bc", "c"}, got)
	assert.Empty(t, Letters(0, nil))
	assert.Equal(t, "z", letter(25))
	assert.Equal(t, "aa", letter(26))
	assert.Equal(t, "az", letter(51))
}

// Three outer items, each not different from two of three inner ones: the inner
// triangle is a column of its own, but every pair in it is held by another.
func TestLettersSweepOutWhatNoPairNeeds(t *testing.T) {
	alike := map[[2]int]bool{{0, 1}: true, {0, 2}: true, {1, 2}: true, // inner
		{0, 3}: true, {1, 3}: true, {1, 4}: true, {2, 4}: true, {0, 5}: true, {2, 5}: true}
	got := Letters(6, func(i, j int) bool { return !alike[[2]int{min(i, j), max(i, j)}] })
	assert.Equal(t, []string{"ab", "ac", "bc", "a", "c", "b"}, got)
}

func TestLettersManyGroups(t *testing.T) {
	got := Letters(30, func(i, j int) bool { return true })
	assert.Equal(t, "a", got[0])
	assert.Equal(t, "z", got[25])
	assert.Equal(t, []string{"aa", "ab", "ac", "ad"}, got[26:])
	assert.Equal(t, []string{"a", "a", "a"}, Letters(3, func(i, j int) bool { return false }))
}

// Two items share a letter exactly where they are not different, no letter can be
// taken from any item, and item 0 has "a".
func TestLettersShareExactlyWhereNotDifferent(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 8).Draw(t, "n")
		differ := make([]bool, n*n)
		for i := range n {
			for j := range i {
				differ[i*n+j] = rapid.Bool().Draw(t, "differ")
			}
		}
		different := func(i, j int) bool { return differ[max(i, j)*n+min(i, j)] }
		wrong := func(letters []string) string {
			for i := range n {
				if letters[i] == "" {
					return "an item without a letter"
				}
				for j := range i {
					if strings.ContainsAny(letters[i], letters[j]) == different(i, j) {
						return fmt.Sprintf("items %d and %d, different %v", i, j, different(i, j))
					}
				}
			}
			return ""
		}
		got := Letters(n, different)
		if fault := wrong(got); fault != "" {
			t.Fatalf("%q: %s", got, fault)
		}
		if !strings.HasPrefix(got[0], "a") {
			t.Fatalf("item 0 has %q", got[0])
		}
		for i, letters := range got {
			for _, l := range letters {
				less := slices.Clone(got)
				less[i] = strings.ReplaceAll(letters, string(l), "")
				if wrong(less) == "" {
					t.Fatalf("%q: item %d does not need %q", got, i, l)
				}
			}
		}
	})
}

// gonum's regularised gamma against an exponential, whose tail is known, and
// far beyond where it underflows.
func TestGammaTail(t *testing.T) {
	for _, x := range []float64{0.1, 1, 10, 100, 600} {
		assert.InEpsilon(t, math.Exp(-x), GammaTail(x, 1, 1), 1e-9)
	}
	assert.Equal(t, 1.0, GammaTail(0, 1, 1))
	assert.Equal(t, 1.0, GammaTail(-3, 1, 1))
	assert.Equal(t, 1e-300, GammaTail(1e6, 1, 1))
	assert.InEpsilon(t, distuv.Gamma{Alpha: 4, Beta: 2}.Survival(5), GammaTail(5, 2, 1), 1e-9)
	assert.Equal(t, 1e-300, GammaTail(math.Inf(1), 2, 1))
	assert.Panics(t, func() { GammaTail(1, 0, 1) })
	assert.Panics(t, func() { GammaTail(1, 1, 0) })
}

// b = 0 of m = 999 gives .001, 4 of 99 .05 (Phipson and Smyth 2010); 1000 samples
// with lags beyond 50 leave 899 shifts.
func TestMonteCarlo(t *testing.T) {
	assert.InDelta(t, .001, MonteCarloP(1, make([]float64, 999)), 1e-15)
	assert.InDelta(t, 1.0, MonteCarloP(0, make([]float64, 9)), 1e-15, "ties count")
	null := make([]float64, 99)
	copy(null, []float64{1, 2, 3, 4})
	assert.InDelta(t, .05, MonteCarloP(1, null), 1e-15)
	lags := Shifts(rand.New(rand.NewPCG(4, 4)), 1000, 50, 5000)
	assert.Len(t, lags, 899)
	slices.Sort(lags)
	assert.Equal(t, 51, lags[0])
	assert.Equal(t, 949, lags[898])
	assert.Len(t, slices.Compact(lags), 899)
	assert.Empty(t, Shifts(rand.New(rand.NewPCG(4, 4)), 10, 5, 3))
	assert.Len(t, Shifts(rand.New(rand.NewPCG(4, 4)), 1000, 50, 80), 80)
	assert.Panics(t, func() { Shifts(rand.New(rand.NewPCG(4, 4)), 10, -1, 3) })
}

// Newcombe 1998, Stat. Med. 17:857–872, Table I.
func TestBinomialIntervals(t *testing.T) {
	cases := []struct {
		k, n          int
		wilson, exact [2]float64
	}{
		{81, 263, [2]float64{.2553, .3662}, [2]float64{.2527, .3676}},
		{15, 148, [2]float64{.0624, .1605}, [2]float64{.0578, .1617}},
		{0, 20, [2]float64{0, .1611}, [2]float64{0, .1684}},
	}
	for _, c := range cases {
		low, high := Wilson(c.k, c.n, .95)
		assert.InDelta(t, c.wilson[0], low, 5e-5)
		assert.InDelta(t, c.wilson[1], high, 5e-5)
		low, high = ClopperPearson(c.k, c.n, .95)
		assert.InDelta(t, c.exact[0], low, 5e-5)
		assert.InDelta(t, c.exact[1], high, 5e-5)
	}
	assert.Panics(t, func() { Wilson(0, 0, .95) })
	assert.Panics(t, func() { ClopperPearson(3, 2, .95) })
	assert.Panics(t, func() { Wilson(1, 2, 95) })
}
