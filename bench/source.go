package bench

import (
	"fmt"

	"codeassay/decoders"
	"codeassay/decoders/tally"
	"codeassay/estimators"
	"codeassay/scenarios"
)

// Source is the recording that experiments read: scenarios.Recording is one, a
// scenario that generates as it is read another.
type Source interface {
	tally.Source
	Streams() []scenarios.Stream
	StreamSamples(stream, trial int) []float64
	Dt() float64 // sample interval of the streams in s
	Meaning() scenarios.TrialMeaning
	Notes() []estimators.Warning
}

var _ Source = (*scenarios.Recording)(nil)

// UnitRules are the burst rules of all units: the study's, with the unit's own
// limits in their place where the units table gives them.
func (part BurstsPart) UnitRules(units []scenarios.Unit) ([]decoders.BurstRule, error) {
	ns := func(ms float64) int64 { return scenarios.Nanoseconds(ms * 1e-3) }
	rules := make([]decoders.BurstRule, len(units))
	for i, u := range units {
		r := &rules[i]
		*r = decoders.BurstRule{MaxISI: ns(part.MaxISIMS), MinSpikes: part.MinSpikes, FirstISI: ns(part.FirstISIMS), MinSilence: ns(part.MinSilenceMS)}
		for _, own := range []struct {
			limit int64
			of    *int64
		}{{u.MaxISI, &r.MaxISI}, {u.FirstISI, &r.FirstISI}, {u.MinSilence, &r.MinSilence}} {
			if own.limit >= 0 {
				*own.of = own.limit
			}
		}
		if err := r.Validate(); err != nil {
			return nil, fmt.Errorf("unit %s: %w", u.Name, err)
		}
	}
	return rules, nil
}
