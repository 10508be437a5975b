package main

import (
	"context"
	"slices"

	"codeassay/bench"
	"codeassay/bench/catalog"
	"codeassay/bench/rank"
	"codeassay/bench/sweep"
)

// rankOptions say how a ranking is run, not what it is.
type rankOptions struct {
	Workers  int
	Progress func(done, total int) // may be nil
}

// runRank ranks a study: once, or for each of its input bandwidths, whose rows
// are then listed one after another.
func runRank(ctx context.Context, study bench.Study, opt rankOptions) (*bench.Document, error) {
	bandwidths := study.Sweep.InputBandwidthsHz
	if len(bandwidths) == 0 {
		return rankOnce(ctx, study, opt)
	}
	var all *bench.Document
	for i, hz := range bandwidths {
		one := study
		one.Recording.BandwidthsHz = []float64{hz}
		part := opt
		if opt.Progress != nil {
			part.Progress = func(done, total int) { opt.Progress(i*total+done, len(bandwidths)*total) }
		}
		doc, err := rankOnce(ctx, one, part)
		if err != nil {
			return nil, err
		}
		doc.MarkInputBandwidth(hz)
		if all == nil {
			all = doc
			continue
		}
		all.Append(doc)
	}
	all.Settings.Sweep.InputBandwidthsHz = bandwidths
	return all, nil
}

func rankOnce(ctx context.Context, study bench.Study, opt rankOptions) (*bench.Document, error) {
	codes, pairs, err := catalog.Codes(study)
	if err != nil {
		return nil, err
	}
	rec, scenario, err := openRecording(study)
	if err != nil {
		return nil, err
	}
	out, err := sweep.Run(ctx, sweep.Request{Study: study, Codes: codes, Pairs: pairs, Source: rec, Workers: opt.Workers, Progress: opt.Progress})
	if err != nil {
		return nil, err
	}
	out.Warnings = slices.Concat(rec.Notes(), out.Warnings)
	var truth *rank.Truth
	if scenario != nil {
		truth = truthOf(scenario)
		out.Settings.Scenario = catalog.InForce(scenario)
	}
	return rank.Assemble(out, study, version(), truth), nil
}
