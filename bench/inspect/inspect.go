package inspect

import (
	"context"
	"fmt"
	"runtime"
	"slices"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/estimators"
	"codeassay/scenarios"
)

// Source is the recording that is inspected; scenarios.Recording is one.
type Source interface {
	Units() []scenarios.Unit
	Trials() []scenarios.Trial
	Train(dst []int64, unit, trial int) []int64
	Labels(unit, trial int) []scenarios.EventLabel
	Streams() []scenarios.Stream
	StreamSamples(stream, trial int) []float64
	Dt() float64
	Meaning() scenarios.TrialMeaning
	Notes() []estimators.Warning
}

var _ Source = (*scenarios.Recording)(nil)

// Run inspects a recording with a study's burst rule. It stops early, with the
// context's error, when the context is done.
func Run(ctx context.Context, study bench.Study, src Source, version string) (*Document, error) {
	doc := &Document{Tool: "codeassay", Version: version, Command: "inspect", Title: study.Title, Seed: study.Seed,
		Platform: runtime.GOARCH, Settings: Settings{Bursts: study.Bursts}, Warnings: slices.Clone(src.Notes())}
	if doc.Warnings == nil {
		doc.Warnings = []estimators.Warning{}
	}
	if err := doc.describeStreams(ctx, src); err != nil {
		return nil, err
	}
	rules, err := unitRules(study.Bursts, src.Units())
	if err != nil {
		return nil, err
	}
	read := newReader(src, rules, study.Bursts, doc.stretches(src))
	pairs := newPairCounter(src, study.Bursts)
	for t, trial := range src.Trials() {
		trains := make([][]int64, len(src.Units()))
		for u := range trains {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			trains[u] = src.Train(nil, u, t)
			if err := read.train(u, t, trains[u]); err != nil {
				return nil, fmt.Errorf("unit %s: %w", src.Units()[u].Name, err)
			}
		}
		if err := pairs.trial(ctx, trial.Duration, trains); err != nil {
			return nil, err
		}
	}
	read.describe(doc)
	doc.Pairs = pairs.check(src)
	doc.warn(src)
	return doc, nil
}

// unitRules is the burst rule of every unit: the study's, with the unit's own
// limits in their place where the units table gives them.
func unitRules(part bench.BurstsPart, units []scenarios.Unit) ([]decoders.BurstRule, error) {
	rules := make([]decoders.BurstRule, len(units))
	for i, u := range units {
		rules[i] = decoders.BurstRule{MaxISI: nanoseconds(part.MaxISIMS), MinSpikes: part.MinSpikes,
			FirstISI: nanoseconds(part.FirstISIMS), MinSilence: nanoseconds(part.MinSilenceMS)}
		for _, own := range []struct {
			limit int64
			of    *int64
		}{{u.MaxISI, &rules[i].MaxISI}, {u.FirstISI, &rules[i].FirstISI}, {u.MinSilence, &rules[i].MinSilence}} {
			if own.limit >= 0 {
				*own.of = own.limit
			}
		}
		if err := rules[i].Validate(); err != nil {
			return nil, fmt.Errorf("unit %s: %w", u.Name, err)
		}
	}
	return rules, nil
}

func nanoseconds(ms float64) int64 { return scenarios.Nanoseconds(ms * 1e-3) }
