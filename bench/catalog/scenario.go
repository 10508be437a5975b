package catalog

import (
	"strings"

	"codeassay/bench"
	"codeassay/estimators/seed"
	"codeassay/scenarios/synthetic"
)

// PairedDrive is the name of the demo scenario.
const PairedDrive = "paired-drive"

// Scenarios are the names that [recording] scenario may take.
func Scenarios() []Entry {
	return []Entry{
		{PairedDrive, "cells with a dead time; one stream drives the rate of events, the other the share that are bursts"},
	}
}

// Scenario makes the scenario that a study names, with the study's seed. The
// error is a *bench.Fault.
func Scenario(study bench.Study) (*synthetic.PairedDrive, error) {
	r := study.Recording
	if err := known(study, "recording.scenario", "scenario", r.Scenario, names(Scenarios())); err != nil {
		return nil, err
	}
	s := synthetic.Settings{Cells: r.Cells, DurationS: r.DurationS, EventRateHz: r.EventRateHz, EventDepth: r.EventDepth,
		BurstShare: r.BurstShare, BurstDepth: r.BurstDepth, Seed: seed.New(study.Seed).Child("scenario")}
	switch n := len(r.BandwidthsHz); n {
	case 0:
	case 1:
		s.BandwidthsHz = [2]float64{r.BandwidthsHz[0], r.BandwidthsHz[0]}
	case 2:
		s.BandwidthsHz = [2]float64{r.BandwidthsHz[0], r.BandwidthsHz[1]}
	default:
		return nil, study.Fault("recording.bandwidths_hz", "[recording] bandwidths_hz has %d cut-offs: one for each of the two streams, or one for both", n)
	}
	p, err := synthetic.NewPairedDrive(s)
	if err != nil {
		key, _, _ := strings.Cut(err.Error(), " ")
		return nil, study.Fault("recording."+key, "[recording] %s", err)
	}
	return p, nil
}

// InForce states the parameters of a scenario, defaults included.
func InForce(p *synthetic.PairedDrive) *bench.ScenarioInForce {
	s := p.Settings()
	return &bench.ScenarioInForce{Name: PairedDrive, EventRateHz: s.EventRateHz, EventDepth: s.EventDepth, BurstShare: s.BurstShare,
		BurstDepth: s.BurstDepth, DeadTimeMS: s.DeadTimeMS, BandwidthsHz: s.BandwidthsHz[:]}
}
