package files

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"codeassay/scenarios"
)

// clock is the written times of successive samples of one trial.
type clock struct {
	times    []float64
	firstRow int
	decimals int // the most that were written
}

// lastDigit is what the last written digit is worth.
func (c clock) lastDigit() float64 { return math.Pow(10, -float64(c.decimals)) }

// interval finds the sample interval in seconds. Of the values that explain the
// written times to their last digit it takes the simplest: the first step if
// all times are multiples of it, whole nanoseconds, one over a whole number of
// hertz, the mean step.
func (c clock) interval() float64 {
	n := len(c.times)
	first, last := c.times[0], c.times[n-1]
	mean := (last - first) / float64(n-1)
	all := func(is func(i int, t float64) bool) bool {
		for i, t := range c.times {
			if !is(i, t) {
				return false
			}
		}
		return true
	}
	if step := c.times[1]; first == 0 && all(func(i int, t float64) bool { return t == float64(i)*step }) {
		return step
	}
	start := scenarios.Nanoseconds(first)
	if step := scenarios.Nanoseconds(c.times[1]) - start; step > 0 &&
		all(func(i int, t float64) bool { return scenarios.Nanoseconds(t) == start+int64(i)*step }) {
		return scenarios.Seconds(step)
	}
	slack := max(c.lastDigit(), 1e-9*math.Abs(last))
	for _, candidate := range []float64{1 / math.Round(1/mean), math.Round(mean*1e9) / 1e9} {
		if math.Abs(candidate*float64(n-1)-(last-first)) < slack {
			return candidate
		}
	}
	return mean
}

// slack is how far a step may be from the interval: 1 % and the rounding of the
// written digits.
func (c clock) slack(dt float64) float64 { return 0.01*dt + min(c.lastDigit(), 0.4*dt) }

// check says where the times leave a uniform grid. No sample may be further from
// its place than half an interval.
func (c clock) check() error {
	dt := c.interval()
	uniform := true
	for i := 1; i < len(c.times) && uniform; i++ {
		step := c.times[i] - c.times[i-1]
		off := c.times[i] - c.times[0] - float64(i)*dt
		uniform = step > 0 && math.Abs(step-dt) <= c.slack(dt) && math.Abs(off) <= dt/2
	}
	if uniform {
		return nil
	}
	for i := 1; i < len(c.times); i++ {
		row, step := c.firstRow+i, c.times[i]-c.times[i-1]
		switch {
		case step == 0:
			return fmt.Errorf("row %d: time_s repeats %s: each sample needs a time of its own", row, short(c.times[i]))
		case step < 0:
			return fmt.Errorf("row %d: time_s falls from %s to %s: sort the rows by time", row, short(c.times[i-1]), short(c.times[i]))
		}
	}
	usual := c.usualStep()
	for i := 1; i < len(c.times); i++ {
		if step := c.times[i] - c.times[i-1]; math.Abs(step-usual) > c.slack(usual) {
			return fmt.Errorf("row %d: time_s steps by %s s where %s s is usual: resample the streams uniformly, or split them into trials at gaps",
				c.firstRow+i, short(step), short(usual))
		}
	}
	return fmt.Errorf("rows %d to %d: the steps of time_s change slowly, from %s to %s s: resample the streams uniformly",
		c.firstRow, c.firstRow+len(c.times)-1, short(c.times[1]-c.times[0]), short(c.times[len(c.times)-1]-c.times[len(c.times)-2]))
}

// usualStep is the median step.
func (c clock) usualStep() float64 {
	steps := make([]float64, len(c.times)-1)
	for i := range steps {
		steps[i] = c.times[i+1] - c.times[i]
	}
	slices.Sort(steps)
	return steps[len(steps)/2]
}

// short writes a number for a message.
func short(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }
