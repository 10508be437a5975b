package scenarios

import (
	"fmt"
	"strings"
)

type spikeAt struct {
	row   int
	key   SpikeKey
	trial int
}

// outside gathers the spikes outside the recording for one error.
type outside struct {
	count, before int
	first         spikeAt
	firstTime     int64 // from the trial's start
	last          int64 // the latest time, from the start of lastTrial
	lastTrial     int
	whole         bool // all of them are whole seconds
}

func (o *outside) add(time int64, at spikeAt) {
	if o.count == 0 {
		o.first, o.firstTime, o.whole = at, time, true
		o.last, o.lastTrial = time, at.trial
	}
	o.count++
	if time < 0 {
		o.before++
	}
	if time > o.last {
		o.last, o.lastTrial = time, at.trial
	}
	o.whole = o.whole && time%1e9 == 0
}

func (o *outside) err(from string, line *timeline) error {
	start, duration := line.starts[o.first.trial], line.trials[o.first.trial].Duration
	var s strings.Builder
	fmt.Fprintf(&s, "%s row %d: unit %q spikes at %s s", from, o.first.row, o.first.key.Unit, formatSeconds(o.firstTime+start))
	if len(line.trials) > 1 {
		fmt.Fprintf(&s, " of trial %d", line.trials[o.first.trial].Number)
	}
	fmt.Fprintf(&s, ", outside the recording, which runs from %s to %s s", formatSeconds(start), formatSeconds(start+duration))
	if o.count == 1 {
		s.WriteString(" (the only such spike): ")
	} else {
		fmt.Fprintf(&s, " (%d such spikes, %d before and %d after it): ", o.count, o.before, o.count-o.before)
	}
	s.WriteString(o.remedy(line))
	return fmt.Errorf("%s", s.String())
}

// remedy guesses the unit of time from how far the latest spike lies beyond the
// end. The bounds: milliseconds of a recording that is mostly covered by spikes
// give a ratio a little below 1000; sampling rates of amplifiers start above.
func (o *outside) remedy(line *timeline) string {
	ratio := float64(o.last) / float64(line.trials[o.lastTrial].Duration)
	latest := formatSeconds(o.last + line.starts[o.lastTrial])
	switch {
	case ratio > 1.05e3 && o.whole && ratio < 1.05e5:
		return fmt.Sprintf("times up to %s look like sample numbers (at about %.0f Hz): divide them by the sampling rate", latest, ratio)
	case ratio > 1.05e5 && ratio < 1.05e6:
		return fmt.Sprintf("times up to %s look like microseconds: divide them by 1e6", latest)
	case ratio > 50 && ratio < 1.05e3:
		return fmt.Sprintf("times up to %s look like milliseconds: divide them by 1000", latest)
	}
	return "correct the times or the clock, or drop such spikes with drop_outside = true"
}
