package report

import (
	"fmt"
	"slices"
	"strings"

	"codeassay/bench"
)

// pairGroups are the joint rows that differ in size alone, of the primary
// estimator, or of all where it has none.
func (v *view) pairGroups() [][]*bench.JointRow {
	type key struct {
		codes, streams, estimator string
		input, low, high          float64
	}
	var out [][]*bench.JointRow
	at := map[key]int{}
	for i := range v.doc.Joint {
		r := &v.doc.Joint[i]
		if r.Estimator != v.primary && v.joint(v.primary) {
			continue
		}
		k := key{strings.Join(r.Codes, "\n"), strings.Join(r.Streams, "\n"), r.Estimator, orZero(r.InputBandwidthHz), orZero(r.BandLowHz), orZero(r.BandHz)}
		if _, ok := at[k]; !ok {
			at[k] = len(out)
			out = append(out, nil)
		}
		out[at[k]] = append(out[at[k]], r)
	}
	return out
}

// pairNote is what tells a pair's figure from its others, on the axis and in the
// name of the file.
func (v *view) pairNote(s scope) (note, label string) {
	bands := map[[2]float64]bool{}
	for _, r := range v.doc.Joint {
		bands[[2]float64{orZero(r.BandLowHz), orZero(r.BandHz)}] = true
	}
	if len(bands) > 1 {
		label += "-" + bandText(s.low, s.high)
	}
	if len(v.inputs) > 1 {
		label += "-in-" + trimmed(bench.Number(s.input), 4) + "-hz"
	}
	if label != "" {
		note = ", " + s.where()
	}
	return note, label
}

// pairs tells what two codes carry when they are read together.
func (v *view) pairs() []block {
	groups := v.pairGroups()
	if len(groups) == 0 {
		return nil
	}
	out := []block{heading{2, "Pairs of codes, read together"}, paragraph{tone: faint,
		text: "One number for the pair about all streams at once. × spike rate: over what the spike rate carries about the same streams. " +
			"× split: over a population of which each half rate-codes one stream, at equal spikes/s."}}
	for _, rows := range groups {
		r := rows[0]
		where := scope{input: orZero(r.InputBandwidthHz), low: orZero(r.BandLowHz), high: orZero(r.BandHz)}.where()
		head := fmt.Sprintf("%s about %s, %s", strings.Join(plainAll(r.Codes), " + "), listed(plainAll(r.Streams)), where)
		if r.Estimator != v.primary {
			head += ", by " + plain(r.Estimator)
		}
		out = append(out, heading{3, head}, pairTable(head, rows))
	}
	return legend(out)
}

// joint reports whether an estimator has joint rows.
func (v *view) joint(estimator string) bool {
	return slices.ContainsFunc(v.doc.Joint, func(r bench.JointRow) bool { return r.Estimator == estimator })
}

func pairTable(caption string, rows []*bench.JointRow) table {
	t := table{caption: caption, columns: []column{
		{head: "cells", number: true},
		{head: "bits/s", number: true},
		{head: percent(rows[0].Confidence, 3) + " interval", unit: "(bits/s)", number: true, expendable: 1},
		{head: "× spike rate", number: true},
		{head: "interval", number: true, expendable: 2},
		{head: "× split", number: true, expendable: 3},
		{head: "interval", number: true, expendable: 4},
		{head: "p", number: true, expendable: spare},
		{head: "truth", unit: "(bits/s)", number: true, expendable: spare + 1},
	}}
	has := make([]bool, len(t.columns))
	for _, r := range rows {
		value, tone := bits(r.BitsPerS, r.CILow, r.CIHigh), neutral
		if !r.Detected {
			value, tone = value+undetected, faint
		}
		texts := []string{count(int64(r.Cells)), value, span(r.BitsPerS, r.CILow, r.CIHigh),
			fixed(r.GainOverSpikeRate, 2), ratioSpan(r.GainLow, r.GainHigh),
			fixed(r.GainOverSplit, 2), ratioSpan(r.GainOverSplitLow, r.GainOverSplitHigh),
			probability(r.PValue), bits(r.TruthBitsPerS, r.CILow, r.CIHigh)}
		line := make([]cell, len(texts))
		for i, s := range texts {
			line[i] = cell{s, tone}
			has[i] = has[i] || s != absent
		}
		t.rows = append(t.rows, line)
	}
	return t.keep(func(i int) bool { return i < 4 || has[i] })
}

// ratioSpan is the interval of a gain.
func ratioSpan(low, high bench.Number) string {
	if !low.Known() || !high.Known() {
		return absent
	}
	return fixed(low, 2) + " to " + fixed(high, 2)
}
