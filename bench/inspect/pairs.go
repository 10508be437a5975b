package inspect

import (
	"cmp"
	"context"
	"math"
	"slices"

	"gonum.org/v1/gonum/mathext"

	"codeassay/bench"
	"codeassay/scenarios"
)

const (
	// together in ns is the distance at which two spikes count as one seen twice.
	together = 5e5
	// mostUnits and mostPairs bound the memory and the time of the comparison.
	mostUnits = 4096
	mostPairs = 150e6
	// chunkS is the length of the pieces that are compared, s.
	chunkS = 1.0
	// pairAlpha is the family-wise false-alarm rate over all pairs.
	pairAlpha = 0.001
	// listed pairs.
	mostListed = 20
)

// What a pair has to show beyond significance, ours: with shared drive, tiny
// excesses are significant in any long recording.
const (
	leastFollowing = 0.05 // of the rarer unit's spikes, beyond the expected
	leastCopied    = 0.1
	leastRatio     = 1.5 // of found to expected
	leastLopsided  = 4.0 // standard deviations between one order and the other
)

// pairCounter counts, for every two units, how often a spike of one follows a
// spike of the other within the burst threshold, and how often both come
// together.
type pairCounter struct {
	limit   int64 // ns
	places  []int // unit → column, −1: not compared
	units   []int // column → unit
	follow  []uint32
	copies  []uint32
	spikes  []int64 // compared, by column
	seconds float64 // compared
	share   float64 // of the recording to be compared
	buffer  []arrival
	trains  [][][]int64 // trial, unit; kept for a second look
}

type arrival struct {
	time int64
	unit int32
}

// newPairCounter chooses the units and the share of time to compare: the units
// with most spikes and evenly spread pieces, where all would take too long. Pieces
// of one cell's trials are not compared: their input is the same.
func newPairCounter(src bench.Source, bursts bench.BurstsPart) *pairCounter {
	c := &pairCounter{limit: nanoseconds(bursts.MaxISIMS)}
	units := src.Units()
	if src.Meaning() == scenarios.TrialsAsCells || len(units) < 2 {
		return c
	}
	spikes := make([]int64, len(units))
	duration := 0.0
	for t, trial := range src.Trials() {
		duration += scenarios.Seconds(trial.Duration)
		for u := range units {
			spikes[u] += int64(len(src.Train(nil, u, t)))
		}
	}
	c.places = make([]int, len(units))
	for u := range units {
		c.places[u] = -1
		if spikes[u] > 1 {
			c.units = append(c.units, u)
		}
	}
	slices.SortStableFunc(c.units, func(a, b int) int { return cmp.Compare(spikes[b], spikes[a]) })
	c.units = c.units[:min(len(c.units), mostUnits)]
	slices.Sort(c.units)
	rate := 0.0
	for column, u := range c.units {
		c.places[u] = column
		rate += float64(spikes[u]) / duration
	}
	n := len(c.units)
	c.follow, c.copies, c.spikes = make([]uint32, n*n), make([]uint32, n*n), make([]int64, n)
	c.share = math.Min(1, mostPairs/(rate*rate*float64(c.limit)*1e-9*duration))
	return c
}

// trial compares the trains of one trial that lasts end ns.
func (c *pairCounter) trial(ctx context.Context, end int64, trains [][]int64) error {
	if len(c.units) < 2 {
		return nil
	}
	c.trains = append(c.trains, trains)
	const chunk = int64(chunkS * 1e9)
	next := make([]int, len(trains))
	chunks, taken := 0, 0.0
	for from := int64(0); from < end; from += chunk {
		chunks++
		if float64(chunks)*c.share <= taken && c.share < 1 {
			continue
		}
		taken++
		if err := ctx.Err(); err != nil {
			return err
		}
		to := min(from+chunk, end)
		c.compare(trains, next, from, to)
		c.seconds += float64(to-from) * 1e-9
	}
	return nil
}

// compare counts for spikes in [from, to); followers may lie beyond. next holds
// where the last call stopped in each train.
func (c *pairCounter) compare(trains [][]int64, next []int, from, to int64) {
	c.buffer = c.buffer[:0]
	for column, u := range c.units {
		t := trains[u]
		i := next[u]
		if i < len(t) && t[i] < from {
			at, _ := slices.BinarySearch(t[i:], from)
			i += at
		}
		for ; i < len(t) && t[i] < to; i++ {
			c.buffer = append(c.buffer, arrival{t[i], int32(column)})
			c.spikes[column]++
		}
		next[u] = i
		for ; i < len(t) && t[i] <= to+c.limit; i++ {
			c.buffer = append(c.buffer, arrival{t[i], int32(column)})
		}
	}
	slices.SortFunc(c.buffer, func(a, b arrival) int {
		if a.time != b.time {
			return cmp.Compare(a.time, b.time)
		}
		return cmp.Compare(a.unit, b.unit)
	})
	n := len(c.units)
	for i, a := range c.buffer {
		if a.time >= to {
			break
		}
		follow, copies := c.follow[int(a.unit)*n:][:n], c.copies[int(a.unit)*n:][:n]
		j := i + 1
		for ; j < len(c.buffer) && c.buffer[j].time-a.time <= together; j++ {
			copies[c.buffer[j].unit]++
		}
		for ; j < len(c.buffer) && c.buffer[j].time-a.time <= c.limit; j++ {
			follow[c.buffer[j].unit]++
		}
	}
}

// check tests all pairs.
func (c *pairCounter) check(src bench.Source) PairCheck {
	out := PairCheck{Units: len(c.units), Seconds: bench.Number(c.seconds), Found: []Pair{}}
	n := len(c.units)
	if n < 2 || c.seconds == 0 {
		out.Units = 0
		return out
	}
	chance := func(a, b int, ns float64) float64 {
		return float64(c.spikes[a]) * float64(c.spikes[b]) * ns * 1e-9 / c.seconds
	}
	// Common drive raises the counts of all pairs alike.
	var followed, followedByChance float64
	for a := range n {
		for b := range n {
			if a != b {
				followed += float64(c.follow[a*n+b])
				followedByChance += chance(a, b, float64(c.limit)-together)
			}
		}
	}
	drive := math.Max(1, followed/math.Max(followedByChance, 1e-300))
	tests := float64(n*(n-1)) * 1.5
	for a := range n {
		for b := range n {
			if a == b {
				continue
			}
			if p, ok := c.follower(src, a, b, drive, tests, chance(a, b, float64(c.limit)-together)); ok {
				out.Followers++
				out.Found = append(out.Found, p)
			}
			if a < b {
				if p, ok := c.copied(src, a, b, drive, tests, chance(a, b, 2*together)); ok {
					out.Copies++
					out.Found = append(out.Found, p)
				}
			}
		}
	}
	slices.SortStableFunc(out.Found, func(p, q Pair) int { return cmp.Compare(q.Z, p.Z) })
	out.Found = out.Found[:min(len(out.Found), mostListed)]
	for i := range out.Found {
		if p := &out.Found[i]; p.Kind == "follower" {
			p.Alone = c.alone(src, p)
		}
	}
	return out
}

// follower tests whether b follows a as the later spikes of a burst follow its
// first: far more often than expected, and than the other way round. Common drive
// and coupling without a direction raise both ways alike.
func (c *pairCounter) follower(src bench.Source, a, b int, drive, tests, chance float64) (Pair, bool) {
	n := len(c.units)
	found, back := float64(c.follow[a*n+b]), float64(c.follow[b*n+a])
	lopsided := (found - back) / math.Sqrt(math.Max(found+back, 1))
	if lopsided < leastLopsided {
		return Pair{}, false
	}
	return c.pair(src, "follower", a, b, found, math.Max(chance*drive, back), tests, leastFollowing)
}

// copied tests whether a and b share spikes.
func (c *pairCounter) copied(src bench.Source, a, b int, drive, tests, chance float64) (Pair, bool) {
	n := len(c.units)
	return c.pair(src, "copy", a, b, float64(c.copies[a*n+b]+c.copies[b*n+a]), chance*drive, tests, leastCopied)
}

func (c *pairCounter) pair(src bench.Source, kind string, a, b int, found, expected, tests, least float64) (Pair, bool) {
	rarer := float64(min(c.spikes[a], c.spikes[b]))
	if found < 5 || found < leastRatio*expected || (found-expected)/rarer < least || poissonTail(found, expected)*tests > pairAlpha {
		return Pair{}, false
	}
	names := src.Units()
	return Pair{Kind: kind, First: names[c.units[a]].Name, Then: names[c.units[b]].Name, Count: int(found), Expected: bench.Number(expected),
		Z: bench.Number((found - expected) / math.Sqrt(math.Max(expected, 1))), Share: bench.Number((found - expected) / rarer), Alone: bench.None}, true
}

// poissonTail is the probability of at least k where mean are expected.
func poissonTail(k, mean float64) float64 {
	if k <= 0 {
		return 1
	}
	if mean <= 0 {
		return 0
	}
	return mathext.GammaIncReg(k, mean)
}

// alone is the share of coincidences of a pair in which the first unit does not
// spike again within the threshold.
func (c *pairCounter) alone(src bench.Source, p *Pair) bench.Number {
	var a, b int
	for _, u := range c.units {
		switch src.Units()[u].Name {
		case p.First:
			a = u
		case p.Then:
			b = u
		}
	}
	count, silent := 0, 0
	for _, trains := range c.trains {
		first, then := trains[a], trains[b]
		j := 0
		for i, t := range first {
			for j < len(then) && then[j] <= t+together {
				j++
			}
			if j == len(then) {
				break
			}
			if then[j]-t <= c.limit {
				count++
				if i+1 == len(first) || first[i+1]-t > c.limit {
					silent++
				}
			}
		}
	}
	return ratio(silent, count)
}
