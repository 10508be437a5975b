package stationarity

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// Blocks is the number of successive blocks that drift is looked for between.
const Blocks = 10

// Change is how a quantity changes over a recording.
type Change struct {
	// Blocks are the means of successive tenths; NaN where there are not ten.
	Blocks []float64
	// Mean over the recording.
	Mean float64
	// Trend is the change from the recording's start to its end along the
	// straight line through the blocks, with its standard error from the scatter
	// of the blocks about it.
	Trend, TrendSE float64
	// PTrend is of a two-sided t test of no trend (8 degrees of freedom), PWander
	// of the test that blocks differ no more than the values in them let expect,
	// PValue of both together. NaN where it cannot be told.
	PTrend, PWander, PValue float64
}

// Drift looks for change in values of equal successive stretches of time (counts
// of spikes, or means of a stream), at least 20 of them, independent of each
// other but for the change: each stretch much longer than the correlation time.
// The values are cut into ten blocks; up to nine values at the end may be left
// over. Fewer than 20 values give NaN for all p.
//
// A trend is tested on block means by least squares. Any other wandering is
// tested by ranks (Kruskal and Wallis 1952, J. Am. Stat. Assoc. 47:583–621), so
// that no assumption on the values is made. The two are combined by Bonferroni.
func Drift(values []float64) Change {
	per := len(values) / Blocks
	c := blockMeans(values)
	if per < 2 {
		return c
	}
	values = values[:per*Blocks]
	if constant(values) {
		c.PTrend, c.PWander, c.PValue = 1, 1, 1
		return c
	}
	c.trend()
	c.PWander = kruskalWallis(values, per)
	c.PValue = math.Min(1, 2*math.Min(c.PTrend, c.PWander))
	return c
}

// blockMeans is the change without its tests.
func blockMeans(values []float64) Change {
	c := Change{Blocks: make([]float64, Blocks), PTrend: math.NaN(), PWander: math.NaN(), PValue: math.NaN()}
	per := len(values) / Blocks
	if per == 0 {
		c.Mean = math.NaN()
		for i := range c.Blocks {
			c.Blocks[i] = math.NaN()
		}
		return c
	}
	for i, v := range values[:per*Blocks] {
		c.Blocks[i/per] += v / float64(per)
		c.Mean += v / float64(per*Blocks)
	}
	return c
}

// trend fits the line; the change is over the whole recording, a tenth more than
// from the first block's middle to the last one's.
func (c *Change) trend() {
	var sxx, sxy float64
	middle := float64(Blocks-1) / 2
	for i, b := range c.Blocks {
		d := float64(i) - middle
		sxx += d * d
		sxy += d * (b - c.Mean)
	}
	slope := sxy / sxx
	var rss float64
	for i, b := range c.Blocks {
		e := b - c.Mean - slope*(float64(i)-middle)
		rss += e * e
	}
	const dof = Blocks - 2
	c.Trend, c.TrendSE = slope*Blocks, math.Sqrt(rss/dof/sxx)*Blocks
	if c.TrendSE == 0 {
		c.PTrend = 1
		if c.Trend != 0 {
			c.PTrend = 0
		}
		return
	}
	c.PTrend = 2 * distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}.Survival(math.Abs(c.Trend/c.TrendSE))
}

// kruskalWallis is the p-value, by χ², that successive groups of per values come
// from one distribution, ties counted at their mean rank.
func kruskalWallis(values []float64, per int) float64 {
	n := len(values)
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(a, b int) int {
		switch {
		case values[a] < values[b]:
			return -1
		case values[a] > values[b]:
			return 1
		}
		return a - b
	})
	sums := make([]float64, n/per)
	ties := 0.0
	for lo := 0; lo < n; {
		hi := lo + 1
		for hi < n && values[order[hi]] == values[order[lo]] {
			hi++
		}
		t := float64(hi - lo)
		ties += t*t*t - t
		for _, i := range order[lo:hi] {
			sums[i/per] += float64(lo+hi+1) / 2
		}
		lo = hi
	}
	m := float64(n)
	h := 0.0
	for _, s := range sums {
		h += s * s / float64(per)
	}
	h = (12/(m*(m+1))*h - 3*(m+1)) / (1 - ties/(m*m*m-m))
	return distuv.ChiSquared{K: float64(len(sums) - 1)}.Survival(h)
}

// StreamDrift looks for change in a stream: it averages over stretches of at
// least ten correlation times, as many as fit up to 80, and calls Drift. The
// correlation time is that of the stream about its block means, so that a drift
// does not pass for slowness. Streams too slow to tell give NaN for all p.
func StreamDrift(x []float64) Change {
	per := Stretch(x)
	if per == 0 {
		return blockMeans(x)
	}
	values := make([]float64, len(x)/per)
	for i := range values {
		for _, v := range x[i*per : (i+1)*per] {
			values[i] += v / float64(per)
		}
	}
	return Drift(values)
}

// Stretch is the number of samples in a stretch that StreamDrift averages over,
// or 0 where fewer than 20 fit.
func Stretch(x []float64) int {
	const most, fewest, correlationTimes = 80, 2 * Blocks, 10
	block := len(x) / Blocks
	if block < 2 || constant(x) {
		return 0
	}
	about := slices.Clone(x)
	for lo := 0; lo < len(about); lo += block {
		part := about[lo:min(lo+block, len(about))]
		mean := 0.0
		for _, v := range part {
			mean += v / float64(len(part))
		}
		for i := range part {
			part[i] -= mean
		}
	}
	if constant(about) {
		return 0
	}
	per := int(math.Ceil(correlationTimes * squareSum(Autocorrelation(nil, about), len(about))))
	per = max(per, len(x)/most)
	if len(x)/per < fewest {
		return 0
	}
	return per
}
