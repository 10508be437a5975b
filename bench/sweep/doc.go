// Package sweep is the engine: it reads an ensemble and estimates the
// information of every code about every stream, at every ensemble size, in every
// band, with each time block left out in turn.
//
// A plan is settled first, from the settings and the shape of the recording
// alone: bins, segments, jackknife blocks, codes and rows. One labelled pass
// files the spikes by block. Then time blocks run outside, draws and units
// inside: within a block the units of each draw are added up in that draw's
// random order, with a snapshot at each ensemble size, so that all sizes of a
// draw cost one pass over the spikes. A block is also the jackknife group, so
// intervals cost no second transform.
//
// What is measured leaves as bench.Piece values, one a draw, combined in index
// order: the same bytes on any number of workers.
package sweep
