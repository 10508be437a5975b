package scenarios

import (
	"fmt"
	"slices"
	"strings"
)

// settleTrials decides what the trials mean, completes the timeline where the
// streams themselves name no trials, and returns the trial of each key.
func settleTrials(spec *Spec, line *timeline, table *spikeTable) (TrialMeaning, []int, error) {
	switch spec.Trials {
	case "", Segments, TrialsAsCells, FrozenRepeats, OneTrial:
	default:
		return "", nil, fmt.Errorf("trials = %q: it must be %q, %q or %q%s", spec.Trials, Segments, TrialsAsCells, FrozenRepeats,
			didYouMean(Nearest(string(spec.Trials), []string{string(Segments), string(TrialsAsCells), string(FrozenRepeats)})))
	}
	set := map[int64]bool{}
	for _, key := range table.keys {
		set[key.Trial] = true
	}
	spikeTrials := sortedNumbers(set)
	shared := false
	switch {
	case len(spikeTrials) == 1 && spikeTrials[0] == NoTrial:
		if len(line.trials) > 1 {
			return "", nil, fmt.Errorf("%s: no trial column, but %s has %d trials: say for each spike to which trial it belongs",
				table.from, spec.StreamsFrom, len(line.trials))
		}
		spikeTrials[0] = line.trials[0].Number
	case spikeTrials[0] == NoTrial:
		row, _ := table.firstRow(func(k SpikeKey) bool { return k.Trial == NoTrial })
		return "", nil, fmt.Errorf("%s row %d: the spike has no trial, others have: number all of them", table.from, row)
	case line.numbered:
		for _, n := range spikeTrials {
			if slices.ContainsFunc(line.trials, func(t Trial) bool { return t.Number == n }) {
				continue
			}
			row, key := table.firstRow(func(k SpikeKey) bool {
				return !slices.ContainsFunc(line.trials, func(t Trial) bool { return t.Number == k.Trial })
			})
			return "", nil, fmt.Errorf("%s row %d: trial %d is not among the trials of %s (%s): correct the number or add its streams",
				table.from, row, key.Trial, spec.StreamsFrom, listTrials(line.trials))
		}
	default:
		shared = len(spikeTrials) > 1
		line.shareAmong(spikeTrials)
	}

	place := map[int64]int{}
	for i, t := range line.trials {
		place[t.Number] = i
	}
	trialOf := make([]int, len(table.keys))
	for i, key := range table.keys {
		trialOf[i] = place[key.Trial] // 0 without a trial column
	}
	meaning, err := spec.meaning(line, shared)
	return meaning, trialOf, err
}

// shareAmong repeats the one stretch of the streams for every trial.
func (t *timeline) shareAmong(numbers []int64) {
	one, start := t.trials[0], t.starts[0]
	t.trials, t.starts = nil, nil
	for _, n := range numbers {
		one.Number = n
		t.trials = append(t.trials, one)
		t.starts = append(t.starts, start)
	}
	t.first = make([]int, len(numbers))
}

func (spec *Spec) meaning(line *timeline, shared bool) (TrialMeaning, error) {
	if len(line.trials) == 1 {
		return OneTrial, nil
	}
	repeated := shared || line.repeated()
	switch spec.Trials {
	case OneTrial:
		return "", fmt.Errorf("trials = %q, but there are %d trials: say %q, %q or %q", OneTrial, len(line.trials), Segments, TrialsAsCells, FrozenRepeats)
	case "":
		if !repeated {
			return Segments, nil
		}
		if shared {
			return "", fmt.Errorf("%s: one stretch of streams for %d trials, so say what a trial is: trials = %q if each trial of a unit stands for one more cell "+
				"of a population under this input, %q if they are repeats of one input to the same cells; if the input was new each time, add a trial column here",
				spec.StreamsFrom, len(line.trials), TrialsAsCells, FrozenRepeats)
		}
		return "", fmt.Errorf("%s: the %d trials have the same streams, so say what a trial is: trials = %q if each trial of a unit stands for one more cell "+
			"of a population under this input, %q if they are repeats of one input to the same cells, %q only if the input was in fact new each time",
			spec.StreamsFrom, len(line.trials), TrialsAsCells, FrozenRepeats, Segments)
	case Segments:
		if shared {
			return "", fmt.Errorf("%s: trials = %q needs the streams of each of the %d trials: add a trial column, or say %q or %q if the input was the same each time",
				spec.StreamsFrom, Segments, len(line.trials), TrialsAsCells, FrozenRepeats)
		}
		return Segments, nil
	}
	if !repeated {
		stream, number, _ := line.firstDifference()
		return "", fmt.Errorf("%s: trials = %q needs one and the same input in every trial, but stream %q differs between trials %d and %d: say %q if the input was new each time",
			spec.StreamsFrom, spec.Trials, stream, line.trials[0].Number, number, Segments)
	}
	shortest, longest := line.trials[0].Samples, line.trials[0].Samples
	for _, t := range line.trials {
		shortest, longest = min(shortest, t.Samples), max(longest, t.Samples)
	}
	if shortest != longest {
		return "", fmt.Errorf("%s: trials = %q needs trials of one length, they have %d to %d samples: set duration_s = %s",
			spec.StreamsFrom, spec.Trials, shortest, longest, formatSeconds(Nanoseconds(float64(shortest)*spec.Dt)))
	}
	line.keepOneCopy()
	return spec.Trials, nil
}

// listTrials writes trial numbers as "0 to 5" where they are successive.
func listTrials(trials []Trial) string {
	first, last := trials[0].Number, trials[len(trials)-1].Number
	if last-first == int64(len(trials)-1) && len(trials) > 1 {
		return fmt.Sprintf("%d to %d", first, last)
	}
	var s []string
	for i, t := range trials {
		if i == 8 {
			s = append(s, "…")
			break
		}
		s = append(s, fmt.Sprint(t.Number))
	}
	return strings.Join(s, ", ")
}

func didYouMean(name string) string {
	if name == "" {
		return ""
	}
	return fmt.Sprintf(" (did you mean %q?)", name)
}
