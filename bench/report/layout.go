package report

import (
	"fmt"
	"strings"

	"codeassay/bench"
	"codeassay/estimators"
)

// layOut tells a document as blocks, the verdict before the evidence.
func layOut(doc *bench.Document, verbose bool) []block {
	v := newView(doc)
	title := plain(doc.Title)
	if title == "" {
		title = "Bits per second of ensemble codes"
	}
	out := []block{heading{1, title}}
	out = append(out, v.headline()...)
	if len(doc.Rows) == 0 {
		out = append(out, paragraph{text: "No code was ranked: the result holds no rows."})
	}
	out = append(out, v.verdict(verbose)...)
	out = append(out, v.bySize()...)
	out = append(out, v.pairs()...)
	out = append(out, v.partial(verbose)...)
	out = append(out, v.byChance()...)
	out = append(out, v.others(verbose)...)
	out = append(out, v.truth()...)
	out = append(out, v.warnings()...)
	return append(out, v.made(verbose)...)
}

// headline says in sentences what was read and how it was measured.
func (v *view) headline() []block {
	rec := v.doc.Recording
	if rec.Cells == 0 {
		return nil
	}
	var s strings.Builder
	fmt.Fprintf(&s, "%s recorded for %s s", counted(int64(rec.Cells), "cell"), trimmed(rec.DurationS, 6))
	if rec.Trials > 1 {
		fmt.Fprintf(&s, " in %s trials", count(int64(rec.Trials)))
		if rec.TrialMeaning != "" {
			fmt.Fprintf(&s, " (%s)", plain(rec.TrialMeaning))
		}
	}
	fmt.Fprintf(&s, " fired %s", counted(rec.Spikes, "spike"))
	if rec.Events > 0 {
		fmt.Fprintf(&s, " in %s", counted(rec.Events, "event"))
	}
	if rec.BurstFraction.Known() {
		fmt.Fprintf(&s, "; %s of the events are bursts", percent(rec.BurstFraction, 3))
		if rec.ChanceBurstFraction.Known() {
			fmt.Fprintf(&s, ", where cells without bursts would show %s by chance", percent(rec.ChanceBurstFraction, 2))
		}
	}
	s.WriteString(". ")
	if names := plainAll(rec.Streams); len(names) == 1 {
		fmt.Fprintf(&s, "One stream: %s.", names[0])
	} else if len(names) > 1 {
		fmt.Fprintf(&s, "%d streams: %s.", len(names), listed(names))
	}
	if sc := v.doc.Settings.Scenario; sc != nil {
		fmt.Fprintf(&s, " The recording is synthetic (scenario %s).", plain(sc.Name))
	}
	out := []block{paragraph{text: strings.TrimSpace(s.String())}}
	if v.primary != "" {
		out = append(out, paragraph{text: v.method()})
	}
	if n := v.weak(); n > 0 {
		out = append(out, paragraph{text: counted(int64(n), "warning") + " at the end: what is weak in these data, and what would help.", tone: alert})
	}
	return out
}

// method says how the verdict's numbers were estimated.
func (v *view) method() string {
	est := v.doc.Settings.Estimate
	var s strings.Builder
	fmt.Fprintf(&s, "Estimated by %s: %s", plain(v.primary), meaning(v.quantity(v.primary)))
	segment := est.SegmentMS
	if ms := v.doc.Settings.Chosen.WelchSegmentMS; v.primary == "welch" && ms > 0 {
		segment = ms
	}
	if first := v.of(v.primary, false); len(first) > 0 && first[0].rows[0].Segments > 0 {
		fmt.Fprintf(&s, ", from %s", counted(int64(first[0].rows[0].Segments), "segment"))
		if segment > 0 {
			fmt.Fprintf(&s, " of %s s", trimmed(bench.Number(segment/1000), 4))
		}
		if used := v.doc.Recording.UsedS; used.Known() {
			fmt.Fprintf(&s, " (%s s used)", trimmed(used, 6))
		}
	}
	s.WriteString(".")
	if most := v.draws(); most > 1 {
		fmt.Fprintf(&s, " Sizes below all cells are means over %d random sub-ensembles.", most)
	}
	return s.String()
}

func (v *view) draws() int {
	most := 0
	for _, r := range v.doc.Rows {
		most = max(most, r.Draws)
	}
	return most
}

// meaning is a quantity in words.
func meaning(q estimators.Quantity) string {
	switch q {
	case estimators.CoherenceRate:
		return "coherence rate in bits/s, a lower bound where the stream is Gaussian"
	case estimators.WindowInformation:
		return "window information, bits a window × windows/s, not a rate where windows depend on each other"
	}
	return plain(string(q))
}

// truth says how the intervals fared where the truth is known.
func (v *view) truth() []block {
	t := v.doc.Truth
	if t == nil {
		return nil
	}
	kind := "closed-form truth"
	if t.Kind == "reference" {
		kind = "truth from a long simulation"
	}
	good := plain(t.Kind)
	if t.Kind == "exact" && (!t.RelativeError.Known() || t.RelativeError == 0) {
		good = "exact"
	} else if t.RelativeError.Known() {
		good += ", good to " + percent(t.RelativeError, 2)
	}
	text := fmt.Sprintf("%s of %s intervals hold the %s (%s).", count(int64(t.Held)), count(int64(t.Rows)), kind, good)
	if t.Rows > 0 {
		text += fmt.Sprintf(" %s would be expected on average of intervals that are right; rows share streams and spikes, so they hold or miss together.", percent(v.confidence(), 3))
	}
	return []block{heading{2, "Against the truth"}, paragraph{text: text}}
}

// said is a warning and the number of rows that bear it.
type said struct {
	estimators.Warning
	rows int
}

// said are the warnings of the document and of its rows, the same words once.
func (v *view) said() []*said {
	var all []*said
	known := map[estimators.Warning]*said{}
	add := func(warnings []estimators.Warning, rows int) {
		for _, w := range warnings {
			if known[w] == nil {
				known[w] = &said{Warning: w}
				all = append(all, known[w])
			}
			known[w].rows += rows
		}
	}
	add(v.doc.Warnings, 0)
	for _, rows := range [][]bench.Row{v.doc.Rows, v.doc.Chance} {
		for _, r := range rows {
			add(r.Warnings, 1)
		}
	}
	for _, r := range v.doc.Joint {
		add(r.Warnings, 1)
	}
	return all
}

// weak is the number of warnings that are more than notes.
func (v *view) weak() int {
	n := 0
	for _, s := range v.said() {
		if s.Severity == estimators.Weak {
			n++
		}
	}
	return n
}

// warnings lists what is weak in the data, then what is worth knowing.
func (v *view) warnings() []block {
	var weak, notes []block
	for _, s := range v.said() {
		text := sentence(plain(s.Text))
		if s.rows > 1 {
			text = fmt.Sprintf("%s (%d rows)", text, s.rows)
		}
		if s.Remedy != "" {
			text += " What would help: " + sentence(plain(s.Remedy))
		}
		i := item{lead: plain(s.About), text: text}
		if s.Severity == estimators.Weak {
			i.tone = alert
			weak = append(weak, i)
		} else {
			notes = append(notes, i)
		}
	}
	var out []block
	if len(weak) > 0 {
		out = append(out, heading{2, "Warnings"})
		out = append(out, weak...)
	}
	if len(notes) > 0 {
		out = append(out, heading{2, "Notes"})
		out = append(out, notes...)
	}
	return out
}

// sentence ends s with a full stop.
func sentence(s string) string {
	if s == "" || strings.HasSuffix(s, ".") || strings.HasSuffix(s, "?") || strings.HasSuffix(s, "!") {
		return s
	}
	return s + "."
}

// made says what the result can be made from again.
func (v *view) made(verbose bool) []block {
	d := v.doc
	b := d.Settings.Bursts
	out := []block{heading{2, "How it was made"}}
	if b.MinSpikes > 0 {
		rule := fmt.Sprintf("A burst is %d or more spikes with intervals of at most %s ms", b.MinSpikes, trimmed(bench.Number(b.MaxISIMS), 6))
		if b.FirstISIMS > 0 {
			rule += fmt.Sprintf(", the first of at most %s ms", trimmed(bench.Number(b.FirstISIMS), 6))
		}
		if b.MinSilenceMS > 0 {
			rule += fmt.Sprintf(", after a silence of %s ms", trimmed(bench.Number(b.MinSilenceMS), 6))
		}
		out = append(out, paragraph{text: rule + "; an event is an isolated spike or a burst."})
	}
	if verbose {
		out = append(out, v.settings())
	}
	made := fmt.Sprintf("%s %s, command %s, seed %d", plain(d.Tool), plain(d.Version), plain(d.Command), d.Seed)
	if d.Platform != "" {
		made += ", on " + plain(d.Platform)
	}
	return append(out, paragraph{text: made + "."})
}

// settings lists what was chosen or set, of the settings that move numbers.
func (v *view) settings() block {
	s := v.doc.Settings
	var parts []string
	add := func(format string, args ...any) { parts = append(parts, fmt.Sprintf(format, args...)) }
	num := func(x float64) string { return trimmed(bench.Number(x), 6) }
	if s.Sweep.BinMS > 0 {
		add("bins of %s ms", num(s.Sweep.BinMS))
	}
	if s.Estimate.HalfBandwidth > 0 {
		add("half-bandwidth %s with %s", num(s.Estimate.HalfBandwidth), counted(int64(s.Chosen.Tapers), "taper"))
	}
	if ms := s.Chosen.WelchSegmentMS; ms > 0 {
		add("Welch segments of %s ms, window %s, overlap %s", num(ms), plain(s.Estimate.Window), num(s.Estimate.Overlap))
	}
	if n := s.Chosen.JackknifeBlocks; n > 0 {
		add("%s left out in turn", counted(int64(n), "block"))
	}
	if n := s.Chosen.CellGroups; n > 0 {
		add("%s of cells left out in turn", counted(int64(n), "group"))
	}
	if n := s.Chosen.PlugInLevels; n > 0 {
		add("%s of the streams in windows", counted(int64(n), "level"))
	}
	if s.Sweep.FractionWindowMS > 0 {
		add("ratio codes in a window of %s ms, shrunken by %s", num(s.Sweep.FractionWindowMS), counted(int64(s.Sweep.FractionPrior), "event"))
	}
	for _, d := range s.Chosen.Delays {
		if d.DelayMS.Known() && d.DelayMS != 0 {
			add("a delay of %s ms behind %s removed", trimmed(d.DelayMS, 4), plain(d.Stream))
		}
	}
	return paragraph{text: "Settings in force: " + strings.Join(parts, "; ") + "."}
}
