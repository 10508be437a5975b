package decoders

import "fmt"

// Kind is what a spike is in its train: the size of the event that it begins.
type Kind uint8

const (
	// Inner is a later spike of a burst. It begins no event.
	Inner Kind = 0
	// Single is an isolated spike, an event of one spike. The first spike of a
	// burst of n spikes has Kind(n), up to Longest.
	Single Kind = 1
	// Longest is the first spike of an event of four or more spikes.
	Longest Kind = 4
)

// Defaults of the burst rule. Limits of 10 to 20 ms are common practice for
// cortical pyramidal cells, no source.
const (
	DefaultMaxISI    int64 = 15e6 // ns
	DefaultMinSpikes int   = 2
)

// BurstRule says what a burst is: at least MinSpikes spikes with successive
// intervals of at most MaxISI, begun by an interval of at most FirstISI after a
// silence of at least MinSilence. An interval equal to a limit satisfies it.
// Limits are in ns. The zero value is not a rule: begin with DefaultBurstRule.
type BurstRule struct {
	MaxISI     int64 // longest interval within a burst
	FirstISI   int64 // longest first interval; 0: as MaxISI
	MinSilence int64 // shortest interval before a burst; 0: none needed
	MinSpikes  int   // fewest spikes of a burst
}

// DefaultBurstRule is two or more spikes with intervals of at most 15 ms.
func DefaultBurstRule() BurstRule {
	return BurstRule{MaxISI: DefaultMaxISI, MinSpikes: DefaultMinSpikes}
}

// Validate returns an error that names the key of the study or of the units
// table, what is wrong with it and what would be right.
func (r BurstRule) Validate() error {
	ms := func(ns int64) float64 { return float64(ns) / 1e6 }
	switch {
	case r.MaxISI <= 0:
		return fmt.Errorf("max_isi_ms = %g: the longest interval within a burst must be above 0 (the usual is %g)", ms(r.MaxISI), ms(DefaultMaxISI))
	case r.MinSpikes < 2:
		return fmt.Errorf("min_spikes = %d: a burst has at least 2 spikes", r.MinSpikes)
	case r.FirstISI < 0:
		return fmt.Errorf("first_isi_ms = %g: must be above 0, or 0 for the same limit as max_isi_ms", ms(r.FirstISI))
	case r.FirstISI > r.MaxISI:
		return fmt.Errorf("first_isi_ms = %g is longer than max_isi_ms = %g: the first interval can only be limited more strictly", ms(r.FirstISI), ms(r.MaxISI))
	case r.MinSilence < 0:
		return fmt.Errorf("min_silence_ms = %g: must be above 0, or 0 for no silence before a burst", ms(r.MinSilence))
	}
	return nil
}

// first is the limit of a burst's first interval in ns.
func (r BurstRule) first() int64 {
	if r.FirstISI == 0 {
		return r.MaxISI
	}
	return r.FirstISI
}

// plain reports whether every run of intervals ≤ MaxISI may begin a burst at its
// first spike: the interval before it exceeds MaxISI, so a silence that is no
// longer is there already.
func (r BurstRule) plain() bool {
	return r.first() == r.MaxISI && r.MinSilence <= r.MaxISI+1
}

// Label labels one train: times are the spikes of one unit in one trial in ns,
// sorted. The start of the trial counts as silence, and a burst never goes on
// into another trial. Spikes are scanned in order: one that is not inside a
// burst begins one if the rule holds from it on, else it is isolated; a burst
// goes on until an interval exceeds MaxISI.
//
// Labels go to dst, one a spike, which is grown where it is too short; nil
// allocates. Label panics on a rule that Validate refuses.
func (r BurstRule) Label(dst []Kind, times []int64) []Kind {
	if r.MaxISI <= 0 || r.MinSpikes < 2 {
		panic("decoders: Label with a burst rule that is not valid")
	}
	dst = kinds(dst, len(times))
	if r.MinSpikes == 2 && r.plain() {
		labelRuns(dst, times, r.MaxISI)
	} else {
		r.labelScan(dst, times)
	}
	return dst
}

// labelRuns labels by the interval limit alone. Going backwards, the run of
// short intervals after a spike is the size of the event that it may begin, and
// no branch depends on the spikes.
func labelRuns(dst []Kind, times []int64, limit int64) {
	if len(times) == 0 {
		return
	}
	run := int64(0)
	next := times[len(times)-1]
	for i := len(times) - 2; i >= 0 && i+1 < len(dst); i-- {
		t := times[i]
		short := (next - t - limit - 1) >> 63 // all ones where the interval is ≤ limit
		dst[i+1] = Kind((min(run, 3) + 1) &^ short)
		run = (run + 1) & short
		next = t
	}
	dst[0] = Kind(min(run, 3) + 1)
}

// labelScan labels by the whole rule. Intervals ≤ MaxISI come in runs, and a run
// holds at most one burst, from the first spike that may begin it to the end.
func (r BurstRule) labelScan(dst []Kind, times []int64) {
	first := r.first()
	for start := 0; start < len(times); {
		end := start + 1 // of the run
		for end < len(times) && times[end]-times[end-1] <= r.MaxISI {
			end++
		}
		i := start
		for ; i < end; i++ {
			silent := i == 0 || times[i]-times[i-1] >= r.MinSilence
			if end-i >= r.MinSpikes && silent && times[i+1]-times[i] <= first {
				break
			}
			dst[i] = Single
		}
		if i < end {
			dst[i] = Kind(min(end-i, int(Longest)))
			clear(dst[i+1 : end])
		}
		start = end
	}
}

// kinds returns dst with length n, anew where it is too short.
func kinds(dst []Kind, n int) []Kind {
	if cap(dst) < n {
		return make([]Kind, n)
	}
	return dst[:n]
}
