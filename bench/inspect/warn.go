package inspect

import (
	"fmt"
	"math"
	"strings"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/scenarios"
)

// Levels at which something is told. A drift or a departure that could be chance
// is not; the others are ours.
const (
	driftAlpha       = 0.001
	leastDrift       = 0.1 // of the mean rate, or of a stream's standard deviation
	tooFew           = 60  // independent values of a stream
	refractoryShare  = 0.005
	correlationAlpha = 0.001
	leastCorrelation = 0.1
)

// warn lists everything suspicious: how bad it is, and what to do.
func (doc *Document) warn(src bench.Source) {
	doc.warnUnits()
	doc.warnBursts()
	doc.warnPairs(src)
	doc.warnRate()
	doc.warnStreams()
}

func (doc *Document) say(severity estimators.Severity, about, remedy, text string, args ...any) {
	doc.Warnings = append(doc.Warnings, estimators.Warning{Severity: severity, About: about, Text: fmt.Sprintf(text, args...), Remedy: remedy})
}

func (doc *Document) warnUnits() {
	if len(doc.Rows) == 1 {
		doc.say(estimators.Weak, "units", "record more cells, or read the trials of one cell as cells",
			"one cell is no ensemble: nothing can be said about ensemble size, and ratios of counts are noisy")
	}
	bad, worst := 0, Unit{}
	worstShare := 0.0
	for _, u := range doc.Rows {
		if u.Spikes < 2 {
			continue
		}
		share := float64(u.Below1MS) / float64(u.Spikes-1)
		if u.Below1MS >= 3 && share > refractoryShare {
			bad++
			if share > worstShare {
				worstShare, worst = share, u
			}
		}
	}
	if bad > 0 {
		doc.say(estimators.Weak, "units", "sort these units again or leave them out: such intervals pass for bursts",
			"%s with more than %.1f %% of intervals below 1 ms, which one cell cannot have (the worst is %s with %.1f %%)",
			ofUnits(bad, len(doc.Rows)), 100*refractoryShare, worst.Unit, 100*worstShare)
	}
}

func ofUnits(n, all int) string { return fmt.Sprintf("%d of %d units", n, all) }

func (doc *Document) warnBursts() {
	r := doc.Recording
	theta := doc.Settings.Bursts.MaxISIMS
	switch {
	case r.Bursts == 0:
		doc.say(estimators.Weak, "bursts", "check [bursts] max_isi_ms against the histogram of intervals",
			"there are no bursts at a threshold of %g ms: codes of bursts carry nothing", theta)
	case r.BurstFraction < 1.5*r.ChanceBurstFraction:
		doc.say(estimators.Weak, "bursts", "a shorter [bursts] max_isi_ms, and compare with the burst-free surrogate that rank shows",
			"the burst fraction of %.3f is close to the %.3f that cells without bursts show by chance at these rates: most bursts may be chance",
			r.BurstFraction, r.ChanceBurstFraction)
	case r.ChanceBurstFraction > 0.1*r.BurstFraction:
		doc.say(estimators.Note, "bursts", "compare with the burst-free surrogate that rank shows",
			"of the burst fraction of %.3f, up to %.3f could be chance", r.BurstFraction, r.ChanceBurstFraction)
	}
	if v := doc.Intervals.ValleyMS; v.Known() && (float64(v) > 1.6*theta || float64(v) < theta/1.6) {
		doc.say(estimators.Note, "bursts", fmt.Sprintf("try [bursts] max_isi_ms = %.2g and see whether the ranking holds", v),
			"the histogram of intervals has its valley near %.2g ms, not at the threshold of %g ms", v, theta)
	}
}

func (doc *Document) warnPairs(src bench.Source) {
	p := doc.Pairs
	if src.Meaning() == scenarios.TrialsAsCells && len(doc.Rows) > 1 {
		doc.say(estimators.Note, "unit pairs", "", "pairs are not compared: trials of one cell under the same input coincide by nature")
	}
	first := func(kind string) Pair {
		for _, f := range p.Found {
			if f.Kind == kind {
				return f
			}
		}
		return Pair{}
	}
	if p.Followers > 0 {
		f := first("follower")
		alone := ""
		if f.Alone.Known() {
			alone = fmt.Sprintf(", %.0f %% of them while %s stays silent", 100*f.Alone, f.First)
		}
		doc.say(estimators.Weak, "unit pairs", "look at the waveforms; merge the units if they are one cell, else every burst is split into two events",
			"%s in which one unit follows the other within %g ms as the later spikes of a burst would (the clearest: %s after %s %d times, %.0f expected%s)",
			pairs(p.Followers), doc.Settings.Bursts.MaxISIMS, f.Then, f.First, f.Count, f.Expected, alone)
	}
	if p.Copies > 0 {
		f := first("copy")
		doc.say(estimators.Weak, "unit pairs", "keep one of the two: copies count as independent cells and make intervals too narrow",
			"%s share spikes within 0.5 ms, as a cell that was sorted twice does (the clearest: %s and %s %d times, %.0f expected, %.0f %% of the rarer unit's spikes)",
			pairs(p.Copies), f.First, f.Then, f.Count, f.Expected, 100*f.Share)
	}
}

func pairs(n int) string {
	if n == 1 {
		return "1 pair of units"
	}
	return fmt.Sprintf("%d pairs of units", n)
}

func (doc *Document) warnRate() {
	s := doc.Steadiness
	if s.PValue < driftAlpha {
		low, high := extremes(s.Blocks)
		doc.say(estimators.Weak, "rate", "cut the recording to a steady part (duration_s), or check the units one by one",
			"the ensemble's rate is not steady: %.3g to %.3g spikes/s in tenths of the recording (trend %+.0f %% from start to end)", low, high, 100*s.Trend)
	}
	drifting, worst := 0, Unit{DriftP: 1}
	tested := 0
	for _, u := range doc.Rows {
		if u.DriftP.Known() {
			tested++
		}
	}
	for _, u := range doc.Rows {
		if u.DriftP.Known() && float64(u.DriftP)*float64(tested) < driftAlpha {
			drifting++
			if u.DriftP < worst.DriftP {
				worst = u
			}
		}
	}
	if drifting > 0 && len(doc.Rows) > 1 {
		doc.say(estimators.Weak, "units", "check whether these units were lost or moved; leave them out and see whether the ranking holds",
			"%s do not keep their rate over the recording (the clearest is %s, p = %.1g)", ofUnits(drifting, len(doc.Rows)), worst.Unit, worst.DriftP)
	}
}

func extremes(x []bench.Number) (low, high bench.Number) {
	low, high = x[0], x[0]
	for _, v := range x {
		low, high = min(low, v), max(high, v)
	}
	return low, high
}

func (doc *Document) warnStreams() {
	seconds := float64(doc.Recording.DurationS)
	for _, s := range doc.Streams {
		if s.SD == 0 {
			doc.say(estimators.Weak, s.Stream, "leave it out", "the stream is as good as constant: it carries nothing to inform about")
			continue
		}
		if s.Independent < tooFew {
			doc.say(estimators.Weak, s.Stream, fmt.Sprintf("record about %.2g times as long", math.Ceil(10*tooFew/float64(s.Independent))/10),
				"the stream is slow: %.0f s of it are worth %.0f independent values, too few for narrow intervals", seconds, s.Independent)
		}
		switch {
		case s.VisiblyOther:
			doc.say(estimators.Weak, s.Stream, "take the coherence rate as a comparison of codes, not as a bound; for a bound, drive with a Gaussian stream",
				"the stream is not Gaussian (%s): the coherence rate is then no bound on its information", s.moments())
		case !s.GaussianP.Known():
			if math.Abs(float64(s.Skewness)) > 0.5 || math.Abs(float64(s.ExcessKurtosis)) > 0.7 {
				doc.say(estimators.Weak, s.Stream, "take the coherence rate as a comparison of codes, not as a bound",
					"the stream looks far from Gaussian (%s), though it is too short against its own correlation time for a test", s.moments())
			}
		}
		switch {
		case s.OverTime.PValue < driftAlpha && s.drift() >= leastDrift:
			low, high := extremes(s.OverTime.Blocks)
			doc.say(estimators.Weak, s.Stream, "remove the drift before ranking, or cut the recording to a steady part (duration_s)",
				"the stream is not steady: its mean over tenths of the recording goes from %.3g to %.3g (standard deviation %.3g)", low, high, s.SD)
		case !s.OverTime.PValue.Known() && s.wander() > 0.3:
			low, high := extremes(s.OverTime.Blocks)
			doc.say(estimators.Weak, s.Stream, "a longer recording, or a stream with less power at low frequencies",
				"the stream cannot be called steady: its mean over tenths of the recording goes from %.3g to %.3g (standard deviation %.3g), and it is too slow to tell drift from chance", low, high, s.SD)
		}
		if lowest := s.lowShare(); lowest > 0.5 {
			doc.say(estimators.Note, s.Stream, "rank over bands that reach down to it", "%.0f %% of the stream's power lies in the lowest 1/%d of its spectrum, below %.2g Hz", 100*lowest, len(s.Spectrum), s.Spectrum[0].HighHz)
		}
	}
	for _, c := range doc.Correlations {
		if c.PValue < correlationAlpha && math.Abs(float64(c.Correlation)) >= leastCorrelation {
			doc.say(estimators.Weak, strings.Join(c.Streams[:], ", "), "read the rows of partial information, which take the other streams as given",
				"the streams are correlated (r = %.2f): each code inherits bits about one from the other", c.Correlation)
		}
	}
}

func (s Stream) moments() string {
	return fmt.Sprintf("skewness %.2f, excess kurtosis %.2f, 0 and 0 for a Gaussian", s.Skewness, s.ExcessKurtosis)
}

// drift is the range of the block means in standard deviations of the stream.
func (s Stream) drift() float64 {
	low, high := extremes(s.OverTime.Blocks)
	return float64((high - low) / s.SD)
}

// wander is the standard deviation of the block means in those of the stream.
func (s Stream) wander() float64 {
	mean, squares := 0.0, 0.0
	n := float64(len(s.OverTime.Blocks))
	for _, b := range s.OverTime.Blocks {
		mean += float64(b) / n
	}
	for _, b := range s.OverTime.Blocks {
		squares += (float64(b) - mean) * (float64(b) - mean) / (n - 1)
	}
	return math.Sqrt(squares) / float64(s.SD)
}

func (s Stream) lowShare() float64 {
	if len(s.Spectrum) == 0 {
		return 0
	}
	return float64(s.Spectrum[0].Share)
}
