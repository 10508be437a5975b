// Package discrete estimates information from counts: two quantities are put
// into levels, their joint table is counted, and the information between them is
// composed of three entropies, each corrected for the bias of small samples.
//
// Counts in, bits out. Methods differ in the correction: the plug-in estimate is
// biased up by about (cells − rows − columns + 1)/(2N ln 2); the jackknife removes
// that and more, at eight samples a cell to about one per cent.
package discrete
