package scenarios

import (
	"fmt"
	"slices"

	"codeassay/estimators"
)

// New checks a specification and builds the recording. An error is one line that
// names the origin, the row and what would be right. Weak data is told by Notes.
// Streams, columns and unit rows are left as they are and may be shared with the
// recording: do not write to them afterwards.
func New(spec Spec) (*Recording, error) {
	for _, origin := range []struct {
		of      *string
		whenNot string
	}{{&spec.SpikesFrom, "spikes"}, {&spec.StreamsFrom, "streams"}, {&spec.UnitsFrom, "units table"}} {
		if *origin.of == "" {
			*origin.of = origin.whenNot
		}
	}
	line, err := layStreams(&spec)
	if err != nil {
		return nil, err
	}
	table, err := gather(&spec)
	if err != nil {
		return nil, err
	}
	meaning, trialOf, err := settleTrials(&spec, line, table)
	if err != nil {
		return nil, err
	}
	dropped, err := table.toTrials(line, trialOf, spec.DropOutside)
	if err != nil {
		return nil, err
	}
	units, err := enrol(&spec, table)
	if err != nil {
		return nil, err
	}

	r := &Recording{streams: line.streams, dt: spec.Dt, trials: line.trials, first: line.first, units: units.units, meaning: meaning, dropped: dropped,
		notes: slices.Clone(spec.Notes)}
	train := make([]int, len(table.keys))
	if meaning == TrialsAsCells {
		numbers := line.trials
		units = units.foldTrials(table, trialOf, numbers)
		r.units = units.units
		r.trials = []Trial{{Samples: numbers[0].Samples, Duration: numbers[0].Duration}}
		r.first = []int{0}
		for i, key := range table.keys {
			train[i] = units.place[pseudoCell(key.Unit, numbers[trialOf[i]].Number)]
		}
	} else {
		for i, key := range table.keys {
			train[i] = units.place[key.Unit]*len(line.trials) + trialOf[i]
		}
	}
	r.times, r.offsets, r.labels = table.lay(train, len(r.units)*len(r.trials))
	if len(r.times) == 0 {
		return nil, fmt.Errorf("%s: all %d spikes lie outside the recording: correct the times or the clock", spec.SpikesFrom, dropped)
	}
	r.takeNotes(&spec, line)
	return r, nil
}

// takeNotes looks for weak data. The texts name units and counts, never rows, so
// that every order of rows gives the same.
func (r *Recording) takeNotes(spec *Spec, line *timeline) {
	note := func(severity estimators.Severity, about, remedy, text string, args ...any) {
		r.notes = append(r.notes, estimators.Warning{Severity: severity, About: about, Text: fmt.Sprintf(text, args...), Remedy: remedy})
	}
	if r.dropped > 0 {
		note(estimators.Weak, "recording", "check the clock and the ends of the recording",
			"%s outside the recording left out, %d kept", plural(r.dropped, "spike", "spikes"), len(r.times))
	}
	switch {
	case r.meaning == TrialsAsCells:
		note(estimators.Note, "trials", "record cells together to learn how much noise they share",
			"%d trials of each unit are read as so many cells: they share no noise by construction, so values for large ensembles are optimistic", len(line.trials))
	case r.meaning == Segments && line.repeated():
		note(estimators.Weak, "trials", `say trials = "cells" or "frozen-repeats" if the input was the same each time`,
			"the streams are the same in all %d trials, yet these are read as segments with a new input each: intervals will be too narrow", len(r.trials))
	case r.meaning == OneTrial && spec.Trials != "" && spec.Trials != OneTrial:
		note(estimators.Note, "trials", "leave the key out, or add the other trials", "trials = %q has no effect on a recording of one trial", spec.Trials)
	}

	inTrial := make([]int, len(r.trials))
	var silent, single, repeats, strayed, repeating int
	var firstSingle, firstRepeat string
	for u := range r.units {
		spikes, same := 0, 0
		for t := range r.trials {
			times := r.Train(nil, u, t)
			inTrial[t] += len(times)
			spikes += len(times)
			for i := 1; i < len(times); i++ {
				if times[i] == times[i-1] {
					same++
				}
			}
			strayed += strayLabels(r.Labels(u, t))
		}
		if spikes == 0 {
			silent++
		}
		if spikes == 1 {
			if single++; single == 1 {
				firstSingle = r.units[u].Name
			}
		}
		if repeats += same; same > 0 {
			if repeating++; repeating == 1 {
				firstRepeat = r.units[u].Name
			}
		}
	}
	var quiet []Trial
	for t, n := range inTrial {
		if n == 0 {
			quiet = append(quiet, r.trials[t])
		}
	}
	if len(quiet) > 0 {
		note(estimators.Weak, "trials", "leave such trials out of the streams if nothing was recorded in them",
			"no unit spikes in %d of %d trials (%s)", len(quiet), len(r.trials), listTrials(quiet))
	}
	if silent > 0 {
		note(estimators.Note, "units", "", "%d of %d units are silent", silent, len(r.units))
	}
	if single > 0 {
		note(estimators.Note, "units", "leave such units out or record longer",
			"%d of %d units have a single spike (the first is %q)", single, len(r.units), firstSingle)
	}
	if repeats > 0 {
		note(estimators.Weak, "spikes", "remove the copies: each counts as a burst",
			"%s at the very time of another of the same unit (%s, the first is %q)",
			plural(repeats, "spike is", "spikes are"), plural(repeating, "unit", "units"), firstRepeat)
	}
	if strayed > 0 {
		note(estimators.Weak, "events", `label the first spike of a burst "first" and the others "inner"`,
			`%s "inner" without a burst's "first" before it`, plural(strayed, "spike is labelled", "spikes are labelled"))
	}
}

// strayLabels counts inner spikes that follow no burst's first spike.
func strayLabels(labels []EventLabel) int {
	n := 0
	for i, l := range labels {
		if l == InnerSpike && (i == 0 || labels[i-1] != FirstSpike && labels[i-1] != InnerSpike) {
			n++
		}
	}
	return n
}
