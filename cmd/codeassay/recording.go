package main

import (
	"codeassay/bench"
	"codeassay/bench/catalog"
	"codeassay/bench/rank"
	"codeassay/scenarios"
	"codeassay/scenarios/files"
	"codeassay/scenarios/synthetic"
)

var _ bench.Source = (*synthetic.PairedDrive)(nil)

// openRecording opens the files or the scenario that a study names; the scenario
// is nil for files.
func openRecording(study bench.Study) (bench.Source, *synthetic.PairedDrive, error) {
	if study.Recording.Scenario != "" {
		p, err := catalog.Scenario(study)
		if err != nil {
			return nil, nil, err
		}
		return p, p, nil
	}
	part := study.Recording
	r, err := files.Read(files.Paths{Spikes: part.Spikes, Streams: part.Streams, UnitsTable: part.UnitsTable},
		files.Options{DurationS: part.DurationS, Units: part.Units, Trials: scenarios.TrialMeaning(part.Trials), DropOutside: part.DropOutside})
	if err != nil {
		return nil, nil, err
	}
	return r, nil, nil
}

// truthOf is the closed form of the scenario.
func truthOf(p *synthetic.PairedDrive) *rank.Truth {
	t := p.Truth()
	return &rank.Truth{Kind: "first-order", RelativeError: t.RelativeError(), Spectra: t, BurstShare: t.BurstShare()}
}
