package inspect

import (
	"context"
	"fmt"
	"runtime"
	"slices"

	"codeassay/bench"
	"codeassay/estimators"
	"codeassay/scenarios"
)

// Run inspects a recording with a study's burst rule. It stops early, with the
// context's error, when the context is done.
func Run(ctx context.Context, study bench.Study, src bench.Source, version string) (*Document, error) {
	doc := &Document{Tool: "codeassay", Version: version, Command: "inspect", Title: study.Title, Seed: study.Seed,
		Platform: runtime.GOARCH, Settings: Settings{Bursts: study.Bursts}, Warnings: slices.Clone(src.Notes())}
	if doc.Warnings == nil {
		doc.Warnings = []estimators.Warning{}
	}
	if err := doc.describeStreams(ctx, src); err != nil {
		return nil, err
	}
	rules, err := study.Bursts.UnitRules(src.Units())
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

func nanoseconds(ms float64) int64 { return scenarios.Nanoseconds(ms * 1e-3) }
