package decoders

import "math"

// ChanceBurstFraction is the fraction of events of a Poisson train, with rate in
// spikes/s, that two or more spikes within maxISI ns make look like bursts:
// 1 − e^(−rate·maxISI). An event begins with each interval longer than maxISI,
// and is a burst if the next one is not (exponential intervals are independent).
func ChanceBurstFraction(rate float64, maxISI int64) float64 {
	return -math.Expm1(-rate * float64(maxISI) * 1e-9)
}

// ChanceEvents is the number of events of 1, 2, 3 and ≥ 4 spikes that the rule
// finds in a stationary Poisson train of rate spikes/s, a spike of the train.
//
// Derived here, verified by simulation: intervals ≤ MaxISI come in runs, one for
// each interval that is longer. A run of k−1 such intervals in a row has
// geometric length, and the burst in it, if any, begins at the first spike with
// the silence before it and the short interval after it. Whether the interval
// before a spike was a silence is a Markov chain of two states along the run.
func (r BurstRule) ChanceEvents(rate float64) [4]float64 {
	short := ChanceBurstFraction(rate, r.MaxISI)
	begin := short // probability that a run has such a spike and interval
	if !r.plain() {
		begin = r.chanceBegin(rate, short)
	}

	// By run: bursts of n spikes are begin·short^(n−2)·(1−short) for n ≥ MinSpikes.
	var events [4]float64
	bursts := begin * math.Pow(short, float64(r.MinSpikes-2))
	inBursts := bursts * (float64(r.MinSpikes) + short/(1-short))
	longer := bursts
	for n := r.MinSpikes; n < int(Longest); n++ {
		events[n-1] = longer * (1 - short)
		longer *= short
	}
	events[Longest-1] += longer
	events[0] = 1/(1-short) - inBursts
	for i := range events {
		events[i] *= 1 - short // runs a spike
	}
	return events
}

// PoissonRate is the rate, in spikes/s, of the Poisson train in which the rule
// finds events a second: rate·e^(−rate·MaxISI) of them with the plain rule. Beyond
// the most events that any Poisson train shows it is 1/MaxISI, which shows them.
func (r BurstRule) PoissonRate(events float64) float64 {
	low, high := events, 1e9/float64(r.MaxISI)
	if low >= high {
		return high
	}
	for range 60 {
		mid := (low + high) / 2
		shown := r.ChanceEvents(mid)
		if mid*(shown[0]+shown[1]+shown[2]+shown[3]) < events {
			low = mid
		} else {
			high = mid
		}
	}
	return (low + high) / 2
}

// chanceBegin is the probability that a run of intervals ≤ MaxISI has a spike
// with a silence before it and an interval ≤ FirstISI after it. short is the
// probability of an interval ≤ MaxISI.
func (r BurstRule) chanceBegin(rate, short float64) float64 {
	within := func(ns int64) float64 { return ChanceBurstFraction(rate, ns) }
	first, limit, silence := r.first(), r.MaxISI, r.MinSilence

	// Probabilities that an interval leads on along the run without beginning a
	// burst, from a spike after a silence and from one that is not.
	silentToSilent := max(0, short-within(max(first, silence)))
	silentToOther := max(0, within(min(silence, limit))-within(first))
	otherToSilent := max(0, short-within(silence))
	otherToOther := within(min(silence, limit))
	visits := math.Exp(-rate*1e-9*float64(max(0, silence-limit))) /
		(1 - silentToSilent - silentToOther*otherToSilent/(1-otherToOther))
	return visits * within(first)
}
