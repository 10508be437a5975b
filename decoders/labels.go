package decoders

import (
	"fmt"

	"codeassay/scenarios"
)

// LabelsToKinds turns the user's own labels of one train, in time order, into
// kinds: the size of a burst is its first spike and the inner ones that follow.
// A first spike without inner ones (a burst cut off by the end of the trial) is
// an event of one spike. An inner spike that follows no burst, and a spike
// without a label, are errors that name the spike, counted from 0.
//
// Kinds go to dst, which is grown where it is too short; nil allocates.
func LabelsToKinds(dst []Kind, labels []scenarios.EventLabel) ([]Kind, error) {
	dst = kinds(dst, len(labels))
	first := -1 // first spike of the burst that is going on
	for i, label := range labels {
		switch label {
		case scenarios.FirstSpike:
			first = i
			dst[i] = Single
		case scenarios.InnerSpike:
			if first < 0 {
				return nil, fmt.Errorf("spike %d is labelled inner, but no burst is going on: label the burst's first spike first", i)
			}
			dst[i] = Inner
			dst[first] = min(dst[first]+1, Longest)
		case scenarios.SingleSpike:
			first = -1
			dst[i] = Single
		default:
			return nil, fmt.Errorf("spike %d has no event label: label it first, inner or single, or label no spike at all", i)
		}
	}
	return dst, nil
}
