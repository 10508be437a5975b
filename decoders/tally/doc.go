// Package tally files the labelled spikes of a recording by time block, and adds
// units up to the signals of an ensemble.
//
// Build labels every train once and files its spikes span by span, within a span
// unit by unit. An Accumulator, the scratch of one worker, then takes one span at
// a time: units are added in any order, and the signals of what has been added
// so far can be read at any point. So all sizes of a nested draw cost one pass
// over the spikes, and a group of units is left out by one subtraction.
//
// All counts are integers: sums are exact, and do not depend on the order of
// units, on workers, or on how the recording is cut into spans.
package tally
