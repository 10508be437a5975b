// Package decoders says how an ensemble is read.
//
// Spike trains are labelled first: a BurstRule tells isolated spikes from
// bursts, and every event (an isolated spike, or the first spike of a burst)
// gets its size in spikes. A Code then names one signal of the ensemble: weights
// over event sizes, optionally over another such sum. The package tally files
// labelled spikes by time block and adds units up to the signals that codes ask
// for.
//
// All times are integer nanoseconds, so that an interval equal to a limit is
// equal, and every container of the same recording gives the same labels.
package decoders
