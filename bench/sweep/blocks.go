package sweep

import (
	"fmt"

	"codeassay/decoders/tally"
)

// maxBlocks bounds the jackknife blocks: beyond some thirty, more of them hardly
// narrow an interval (Student's quantile is within 4 % of the normal one).
const maxBlocks = 32

// layBlocks cuts the recording into jackknife blocks of whole segments of length
// bins, never across a trial's edge, as equal as they can be. It returns for
// each block its spans, and its length in segments. With frozen repeats a block
// is one stretch of the input in every repeat.
func layBlocks(trialBins []int, length int, frozen bool) (blocks [][]tally.Span, weights []float64, err error) {
	type segment struct{ trial, first int }
	var segments []segment
	trials := len(trialBins)
	if frozen {
		trials = 1
	}
	for r := range trials {
		for first := 0; first+length <= trialBins[r]; first += length {
			segments = append(segments, segment{r, first})
		}
	}
	if len(segments) < 2 {
		return nil, nil, fmt.Errorf("the recording holds %d segments of %d bins: at least 2 are needed, %d for an interval that can be trusted", len(segments), length, 15)
	}
	n := min(len(segments), maxBlocks)
	for j := range n {
		lo, hi := j*len(segments)/n, (j+1)*len(segments)/n
		var spans []tally.Span
		for _, s := range segments[lo:hi] {
			last := len(spans) - 1
			if last >= 0 && spans[last].Trial == s.trial && spans[last].First+spans[last].Bins == s.first {
				spans[last].Bins += length
				continue
			}
			spans = append(spans, tally.Span{Trial: s.trial, First: s.first, Bins: length})
		}
		if frozen {
			once := spans
			spans = nil
			for r := range trialBins {
				for _, s := range once {
					spans = append(spans, tally.Span{Trial: r, First: s.First, Bins: s.Bins})
				}
			}
		}
		blocks = append(blocks, spans)
		weights = append(weights, float64(hi-lo))
	}
	return blocks, weights, nil
}
