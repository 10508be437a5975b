// Package rank turns the pieces of a sweep into a ranked result: means over
// draws, intervals, tests of the null, ranks and letters, gains of pairs, and,
// for synthetic scenarios, the closed-form truth beside them.
package rank
