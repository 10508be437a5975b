package scenarios

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// longestTrialS in seconds is 11 days: up to there nanoseconds survive the way
// through seconds in float64 with a margin.
const longestTrialS = 1e6

// timeline is what the streams say: their samples, trial by trial, and when each
// trial starts on the clock of the spikes.
type timeline struct {
	streams []Stream
	trials  []Trial
	first   []int
	starts  []int64
	// numbered: the streams themselves name the trials.
	numbered bool
}

// layStreams checks the streams and cuts them into trials by rising number.
func layStreams(spec *Spec) (*timeline, error) {
	from := spec.StreamsFrom
	if err := checkStreams(spec); err != nil {
		return nil, err
	}
	n := len(spec.Streams[0].Samples)
	counts, numbers := spec.TrialSamples, spec.TrialNumbers
	t := &timeline{streams: slices.Clone(spec.Streams), numbered: counts != nil}
	if counts == nil {
		counts = []int{n}
	}
	total := 0
	for _, c := range counts {
		total += c
	}
	if total != n || slices.Min(counts) < 1 {
		return nil, fmt.Errorf("%s: the trials' samples %v do not add up to the streams' %d", from, counts, n)
	}
	if numbers == nil {
		numbers = make([]int64, len(counts))
		for i := range numbers {
			numbers[i] = int64(i)
		}
	}
	if len(numbers) != len(counts) {
		return nil, fmt.Errorf("%s: %d trial numbers for %d trials", from, len(numbers), len(counts))
	}
	if len(spec.StartS) > 1 && len(spec.StartS) != len(counts) {
		return nil, fmt.Errorf("%s: %d start times for %d trials: give one for all or one for each", from, len(spec.StartS), len(counts))
	}

	at, kept, inOrder := 0, 0, slices.IsSorted(numbers)
	var pieces []int // where the kept samples of each trial start in the input
	for i, c := range counts {
		trial := Trial{Number: numbers[i], Samples: c}
		if seconds := float64(c) * spec.Dt; seconds > longestTrialS {
			return nil, fmt.Errorf("%s: a trial of %g s is longer than 11 days: split it, or correct the sample interval of %v s", from, seconds, spec.Dt)
		}
		if spec.DurationS > 0 {
			whole := int(min(spec.DurationS/spec.Dt+1e-6, 1e15))
			if whole > c {
				return nil, fmt.Errorf("%s: duration_s = %v, but the streams%s end after %s s: shorten duration_s or leave it out",
					from, spec.DurationS, ofTrial(len(counts), numbers[i]), formatSeconds(Nanoseconds(float64(c)*spec.Dt)))
			}
			if whole < 2 {
				return nil, fmt.Errorf("%s: duration_s = %v is less than two samples of %v s", from, spec.DurationS, spec.Dt)
			}
			trial.Samples = whole
		}
		trial.Duration = Nanoseconds(float64(trial.Samples) * spec.Dt)
		t.trials = append(t.trials, trial)
		t.starts = append(t.starts, startOf(spec, i))
		pieces = append(pieces, at)
		at += c
		kept += trial.Samples
	}
	if !inOrder || kept < n {
		t.reorder(pieces)
	}
	for i := 1; i < len(t.trials); i++ {
		if t.trials[i].Number == t.trials[i-1].Number {
			return nil, fmt.Errorf("%s: trial %d appears twice: its samples must follow each other", from, t.trials[i].Number)
		}
	}
	at = 0
	for _, trial := range t.trials {
		t.first = append(t.first, at)
		at += trial.Samples
	}
	return t, t.checkConstant(from)
}

// reorder copies the kept samples of all trials, by rising number.
func (t *timeline) reorder(pieces []int) {
	order := make([]int, len(t.trials))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(t.trials[a].Number, t.trials[b].Number) })
	trials, starts := make([]Trial, len(order)), make([]int64, len(order))
	for i, o := range order {
		trials[i], starts[i] = t.trials[o], t.starts[o]
	}
	for s := range t.streams {
		var samples []float64
		for _, o := range order {
			samples = append(samples, t.streams[s].Samples[pieces[o]:pieces[o]+t.trials[o].Samples]...)
		}
		t.streams[s].Samples = samples
	}
	t.trials, t.starts = trials, starts
}

func startOf(spec *Spec, trial int) int64 {
	switch len(spec.StartS) {
	case 0:
		return 0
	case 1:
		return Nanoseconds(spec.StartS[0])
	}
	return Nanoseconds(spec.StartS[trial])
}

func checkStreams(spec *Spec) error {
	from := spec.StreamsFrom
	if len(spec.Streams) == 0 {
		return fmt.Errorf("%s: no stream: at least one signal that drove the cells is needed", from)
	}
	if !(spec.Dt >= 1e-9) || math.IsInf(spec.Dt, 0) {
		return fmt.Errorf("%s: the sample interval is %v s: a nanosecond or more is needed", from, spec.Dt)
	}
	if spec.DurationS < 0 || math.IsNaN(spec.DurationS) || math.IsInf(spec.DurationS, 0) {
		return fmt.Errorf("duration_s = %v: it must be positive, or left out", spec.DurationS)
	}
	for _, s := range spec.StartS {
		if err := CheckTime(s); err != nil {
			return fmt.Errorf("%s: the start time %w", from, err)
		}
	}
	n := len(spec.Streams[0].Samples)
	for i, s := range spec.Streams {
		if s.Name == "" {
			return fmt.Errorf("%s: stream %d has no name", from, i+1)
		}
		for _, other := range spec.Streams[:i] {
			if other.Name == s.Name {
				return fmt.Errorf("%s: two streams are named %q: rename one", from, s.Name)
			}
		}
		if len(s.Samples) != n {
			return fmt.Errorf("%s: stream %q has %d samples, %q has %d: all streams need the same length",
				from, s.Name, len(s.Samples), spec.Streams[0].Name, n)
		}
		if n < 2 {
			return fmt.Errorf("%s: stream %q has %d samples: at least two are needed", from, s.Name, n)
		}
		for k, v := range s.Samples {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return fmt.Errorf("%s: stream %q is %s at sample %d: fill the gap or cut the recording", from, s.Name, notFinite(v), k)
			}
		}
	}
	return nil
}

func (t *timeline) checkConstant(from string) error {
	for _, s := range t.streams {
		if !slices.ContainsFunc(s.Samples, func(v float64) bool { return v != s.Samples[0] }) {
			return fmt.Errorf("%s: stream %q is constant (%v) and so carries no information: leave it out or record what varied",
				from, s.Name, s.Samples[0])
		}
	}
	return nil
}

// repeated says whether all trials run under one and the same input: equal
// samples as far as the shorter of two trials goes.
func (t *timeline) repeated() bool {
	_, _, same := t.firstDifference()
	return same && len(t.trials) > 1
}

// firstDifference finds a stream and a trial that differ from the first trial.
func (t *timeline) firstDifference() (stream string, trial int64, same bool) {
	for i := range t.trials {
		for _, s := range t.streams {
			n := min(t.trials[0].Samples, t.trials[i].Samples)
			if !slices.Equal(s.Samples[:n], s.Samples[t.first[i]:t.first[i]+n]) {
				return s.Name, t.trials[i].Number, false
			}
		}
	}
	return "", 0, true
}

// keepOneCopy leaves the samples of the first trial alone, for all trials.
func (t *timeline) keepOneCopy() {
	n := t.trials[0].Samples
	for s := range t.streams {
		t.streams[s].Samples = t.streams[s].Samples[:n:n]
	}
	clear(t.first)
}

func notFinite(v float64) string {
	if math.IsNaN(v) {
		return "NaN"
	}
	return "infinite"
}

func ofTrial(trials int, number int64) string {
	if trials < 2 {
		return ""
	}
	return fmt.Sprintf(" of trial %d", number)
}

// formatSeconds writes ns exactly, in seconds, without trailing zeros.
func formatSeconds(ns int64) string {
	sign := ""
	if ns < 0 {
		sign, ns = "-", -ns
	}
	s := fmt.Sprintf("%d.%09d", ns/1e9, ns%1e9)
	return sign + strings.TrimSuffix(strings.TrimRight(s, "0"), ".")
}

func plural(n int, one, many string) string {
	if n == 1 {
		return strconv.Itoa(n) + " " + one
	}
	return strconv.Itoa(n) + " " + many
}
