package report

import (
	"fmt"
	"strings"

	"codeassay/bench"
)

// undetected marks values that are not told apart from zero, where a table has
// no room for words; a line under the table says so.
const undetected = "†"

// verdict ranks the codes of every scope of the primary estimator at its largest
// size, or, verbose, at every size.
func (v *view) verdict(verbose bool) []block {
	groups := v.of(v.primary, false)
	if len(groups) == 0 {
		return nil
	}
	out := []block{heading{2, "Ranking"}}
	out = append(out, paragraph{text: v.explain(), tone: faint})
	for _, g := range groups {
		out = append(out, v.ranked(g, verbose)...)
	}
	return out
}

// explain says what letters and intervals mean.
func (v *view) explain() string {
	level := percent(1-v.confidence(), 3)
	return fmt.Sprintf("Codes that share a letter cannot be told apart at family-wise %s; ranks and letters hold within one table. "+
		"The %s interval is for these cells (sampling in time); the one for new cells also for others from the same population.",
		level, percent(v.confidence(), 3))
}

// ranked is the heading, the verdict in words and the table of one group.
func (v *view) ranked(g *group, verbose bool) []block {
	about := "About " + plain(g.stream)
	if g.given != "" {
		about += ", given " + listed(plainAll(strings.Split(g.given, "\n")))
	}
	sizes := g.sizes()
	shown := sizes[len(sizes)-1:]
	if verbose {
		shown = sizes
	}
	var out []block
	for i := range shown {
		cells := shown[len(shown)-1-i] // the largest first
		head := fmt.Sprintf("%s, %s, %s", about, g.where(), counted(int64(cells), "cell"))
		rows := g.at(cells)
		out = append(out, heading{3, head}, paragraph{text: verdictOf(rows, v.confidence())}, rankTable("Ranking. "+head, rows))
		if used, band := rows[0].UsedHz, g.high-g.low; used.Known() && float64(used) < 0.999*band {
			out = append(out, paragraph{text: fmt.Sprintf("The stream has power in %s of these %s Hz; only that is summed.",
				trimmed(used, 3), trimmed(bench.Number(band), 4)), tone: faint})
		}
	}
	return out
}

// verdictOf says in words which code carries most, and what it can be told from.
func verdictOf(rows []*bench.Row, confidence bench.Number) string {
	var found []*bench.Row
	var lost []string
	for _, r := range rows {
		if r.Detected {
			found = append(found, r)
		} else {
			lost = append(lost, plain(r.Code))
		}
	}
	if len(found) == 0 {
		chance := percent(1-confidence, 3)
		if len(rows) == 1 {
			return fmt.Sprintf("%s is not detected: it is not told apart from chance at %s.", lost[0], chance)
		}
		return fmt.Sprintf("Not detected: none of the %d codes is told apart from chance at %s.", len(rows), chance)
	}
	top := found[0]
	text := fmt.Sprintf("%s carries most, %s bits/s", plain(top.Code), bits(top.BitsPerS, top.CILow, top.CIHigh))
	if len(rows) == 1 {
		text = fmt.Sprintf("%s carries %s bits/s", plain(top.Code), bits(top.BitsPerS, top.CILow, top.CIHigh))
	}
	var tied []string
	for _, r := range found[1:] {
		if strings.ContainsAny(r.Letters, top.Letters) {
			tied = append(tied, plain(r.Code))
		}
	}
	switch {
	case len(found) == 1 && len(rows) > 1:
		text += ", and is the only code detected"
	case len(tied) > 0:
		text += ", but cannot be told apart from " + listedBy(tied, "or")
	case len(found) > 1:
		text += ", and more than any other"
	}
	text += "."
	if len(lost) > 0 && len(found) > 1 {
		text += " Not detected: " + listed(lost) + "."
	}
	return text
}

// rankTable is one family in full.
func rankTable(caption string, rows []*bench.Row) table {
	level := percent(rows[0].Confidence, 3)
	t := table{caption: caption, columns: []column{
		{head: "rank"},
		{head: "code", wrap: true},
		{head: "bits/s", number: true, point: true},
		{head: level + " interval", unit: "(bits/s)", number: true, expendable: 1},
		{head: "for new cells", unit: "(bits/s)", number: true, expendable: 3},
		{head: "bits/spike", number: true, expendable: 2},
		{head: "p", number: true, expendable: spare},
		{head: "truth", unit: "(bits/s)", number: true, expendable: spare + 1},
		{head: "bits/event", number: true, expendable: spare + 2},
		{head: "spread of draws", unit: "(bits/s)", number: true, expendable: spare + 3},
	}}
	has := make([]bool, len(t.columns))
	for _, r := range rows {
		tone, place, perSpike := neutral, absent, digits(r.BitsPerSpike, 3)
		switch {
		case !r.Detected:
			tone, perSpike = faint, "not detected"
		case r.Rank != nil:
			place = strings.TrimSpace(fmt.Sprintf("%d %s", *r.Rank, r.Letters))
			if *r.Rank == 1 {
				tone = strong
			}
		}
		spread := absent // of one draw there is none
		if r.Draws > 1 {
			spread = digits(r.DrawSD, 2)
		}
		texts := []string{place, plain(r.Code), bits(r.BitsPerS, r.CILow, r.CIHigh), span(r.BitsPerS, r.CILow, r.CIHigh),
			span(r.BitsPerS, r.CICellsLow, r.CICellsHigh), perSpike, probability(r.PValue),
			bits(r.TruthBitsPerS, r.CILow, r.CIHigh), digits(r.BitsPerEvent, 3), spread}
		line := make([]cell, len(texts))
		for i, s := range texts {
			line[i] = cell{s, tone}
			has[i] = has[i] || s != absent
		}
		t.rows = append(t.rows, line)
	}
	return t.keep(func(i int) bool { return i < 4 || has[i] })
}
