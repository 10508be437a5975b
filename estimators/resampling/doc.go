// Package resampling holds the statistics that every estimator shares: the
// delete-a-group jackknife and the moving-block bootstrap, circular shifts and
// Monte-Carlo p-values, corrections for many comparisons with their compact
// letters, and exact binomial intervals.
package resampling
