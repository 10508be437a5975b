// Package scenarios says where spikes and streams come from: files of a lab, or
// synthetic ensembles whose information is known.
//
// A Recording is what every later stage reads: the spike trains of all units,
// trial by trial, and the streams that drove them. It is built only through
// New, which validates, and it is read-only afterwards, so stages may share it
// without locks.
package scenarios

import "codeassay/estimators"

// TrialMeaning says what the trials of a recording are.
type TrialMeaning string

const (
	// OneTrial: the recording is one uninterrupted stretch.
	OneTrial TrialMeaning = "one"
	// Segments: every trial has a fresh input of its own.
	Segments TrialMeaning = "segments"
	// TrialsAsCells: each trial of a unit has been made one more member of a
	// pseudo-population under the same input. Such a recording has one trial.
	TrialsAsCells TrialMeaning = "cells"
	// FrozenRepeats: every trial repeats one and the same input.
	FrozenRepeats TrialMeaning = "frozen-repeats"
)

// Stream is one input signal, sampled uniformly.
type Stream struct {
	Name    string
	Measure string // unit of measure, "" where unknown
	// Samples of all trials, one trial after another; with FrozenRepeats of
	// one trial only. Sample i of a trial covers [i·dt, (i+1)·dt).
	Samples []float64
	// BandHz is the upper edge of the stream's band where it is known by
	// design, 0 where it has to be estimated.
	BandHz float64
}

// Trial is one stretch of the recording.
type Trial struct {
	Number    int64 // as in the files; 0 where they number none
	Condition string
	Duration  int64 // ns: Samples × dt, rounded
	Samples   int   // stream samples in this trial
}

// Unit is one cell. Interval limits in ns override the study's burst rule;
// −1 means "as in the study".
type Unit struct {
	Name       string
	CellType   string
	Condition  string
	MaxISI     int64
	FirstISI   int64
	MinSilence int64
}

// NewUnit returns a unit that follows the study's burst rule.
func NewUnit(name string) Unit {
	return Unit{Name: name, MaxISI: -1, FirstISI: -1, MinSilence: -1}
}

// EventLabel is a label that the user's own file gives to a spike.
type EventLabel uint8

const (
	Unlabelled  EventLabel = iota
	FirstSpike             // first spike of a burst
	InnerSpike             // later spike of a burst
	SingleSpike            // isolated spike
)

// Recording is the spike trains of all units, trial by trial, and the streams
// that drove them. The slices that its methods return belong to it: read them,
// never write. It is safe for any number of readers at once.
type Recording struct {
	streams []Stream
	dt      float64
	trials  []Trial
	first   []int // sample at which each trial starts
	units   []Unit
	meaning TrialMeaning
	times   []int64
	offsets []int // train unit·trials+trial is times[offsets[i]:offsets[i+1]]
	labels  []EventLabel
	dropped int
	notes   []estimators.Warning
}

// Streams returns the streams in the order of the file.
func (r *Recording) Streams() []Stream { return r.streams }

// Dt returns the sample interval of all streams in seconds.
func (r *Recording) Dt() float64 { return r.dt }

// Trials returns the trials by rising number.
func (r *Recording) Trials() []Trial { return r.trials }

// Units returns the units in their one canonical order: by value if all names
// are numbers, else by bytes; units without a spike come last. Pseudo-cells
// name#trial are ordered by name, then by trial.
func (r *Recording) Units() []Unit { return r.units }

// Meaning says what the trials are.
func (r *Recording) Meaning() TrialMeaning { return r.meaning }

// PseudoCells says whether the units are trials of fewer cells.
func (r *Recording) PseudoCells() bool { return r.meaning == TrialsAsCells }

// Train returns the spike times of a unit in a trial: nanoseconds from the
// trial's start, sorted, in [0, Duration). It is a part of the recording and
// leaves dst alone, which is there for sources that generate their trains.
func (r *Recording) Train(dst []int64, unit, trial int) []int64 {
	lo, hi := r.span(unit, trial)
	return r.times[lo:hi:hi]
}

// Labels returns the user's own event labels, one for each spike of Train, or
// nil if the recording came without.
func (r *Recording) Labels(unit, trial int) []EventLabel {
	if r.labels == nil {
		return nil
	}
	lo, hi := r.span(unit, trial)
	return r.labels[lo:hi:hi]
}

func (r *Recording) span(unit, trial int) (lo, hi int) {
	if trial < 0 || trial >= len(r.trials) {
		panic("scenarios: trial out of range")
	}
	i := unit*len(r.trials) + trial
	return r.offsets[i], r.offsets[i+1]
}

// StreamSamples returns the samples of a stream in a trial; with FrozenRepeats
// it is the same slice for every trial.
func (r *Recording) StreamSamples(stream, trial int) []float64 {
	lo := r.first[trial]
	hi := lo + r.trials[trial].Samples
	return r.streams[stream].Samples[lo:hi:hi]
}

// Spikes returns the number of spikes in all.
func (r *Recording) Spikes() int { return len(r.times) }

// DurationS returns the seconds of all trials together.
func (r *Recording) DurationS() float64 {
	var ns int64
	for _, t := range r.trials {
		ns += t.Duration
	}
	return Seconds(ns)
}

// Dropped returns how many spikes outside the recording were left out on
// request.
func (r *Recording) Dropped() int { return r.dropped }

// Notes returns what was found on reading that a user should know.
func (r *Recording) Notes() []estimators.Warning { return r.notes }
