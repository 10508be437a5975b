package sweep

import (
	"codeassay/bench"
	"codeassay/decoders/tally"
	"codeassay/estimators"
)

// describe adds what the outcome says of the recording and the settings.
func (g *engine) describe(out *bench.Outcome) {
	out.Layout = g.layout
	out.Settings = g.settings
	out.Settings.Chosen.CellGroups = cellGroups
	out.Warnings = append(out.Warnings, g.warnings...)
	var counts tally.Totals
	chance := 0.0
	seconds := 0.0
	for _, trial := range g.src.Trials() {
		seconds += float64(trial.Duration) * 1e-9
	}
	for u := range g.layout.Cells {
		t := g.store.Totals(u)
		counts = counts.Add(t)
		chance += chanceBursts(g.rules[u].ChanceEvents(g.rules[u].PoissonRate(t.EventCount()/seconds))) * t.EventCount()
	}
	trains := counts.Trains()
	events := counts.EventCount()
	bursts := counts.BurstCount()
	names := make([]string, len(g.layout.Streams))
	copy(names, g.layout.Streams)
	blocks := make([][]tally.Span, len(g.blocks))
	for j, ids := range g.blocks {
		for _, id := range ids {
			blocks[j] = append(blocks[j], g.spans[id])
		}
	}
	used := g.usedS(blocks)
	out.Recording = bench.RecordingSummary{
		Cells: g.layout.Cells, Trials: len(g.src.Trials()), TrialMeaning: string(g.src.Meaning()),
		DurationS: bench.Number(seconds), UsedS: bench.Number(used), Spikes: int64(trains[0]),
		Events: int64(events), Bursts: int64(bursts), Streams: names,
		BurstFraction: ratio(bursts, events), ChanceBurstFraction: ratio(chance, events),
	}
	for s, lag := range g.lags {
		out.DelaysMS = append(out.DelaysMS, float64(lag)*g.bin*1e3)
		out.Settings.Chosen.Delays = append(out.Settings.Chosen.Delays, bench.StreamDelay{Stream: g.layout.Streams[s], DelayMS: bench.Number(out.DelaysMS[s])})
	}
	if events == 0 {
		out.Warnings = append(out.Warnings, estimators.Warning{Severity: estimators.Weak, About: "recording",
			Text: "there are no spikes in the recording", Remedy: "check the files"})
	}
}

// chanceBursts is the share of bursts among events, by their sizes.
func chanceBursts(events [4]float64) float64 {
	bursts := events[1] + events[2] + events[3]
	if bursts == 0 {
		return 0
	}
	return bursts / (events[0] + bursts)
}

func ratio(a, b float64) bench.Number {
	if b == 0 {
		return bench.None
	}
	return bench.Number(a / b)
}

// significance is the level of the tests inside a sweep.
func significance(confidence float64) float64 { return 1 - confidence }
