package inspect

import (
	"fmt"
	"io"
	"math"
	"strings"
	"unicode/utf8"

	"codeassay/bench"
	"codeassay/estimators"
)

// TextOptions say how text is laid out.
type TextOptions struct {
	Width  int  // columns; 0: 80
	Colour bool // in addition to words, never instead
}

const (
	bold   = "\x1b[1m"
	yellow = "\x1b[33m"
	plain  = "\x1b[0m"
)

// page writes lines of limited width.
type page struct {
	b      strings.Builder
	width  int
	colour bool
}

// Text writes the document for people.
func (doc *Document) Text(w io.Writer, o TextOptions) error {
	p := &page{width: o.Width, colour: o.Colour}
	if p.width == 0 {
		p.width = 80
	}
	p.width = max(p.width, 40)
	doc = doc.printable()
	if doc.Title != "" {
		p.wrap("", "", p.paint(bold, doc.Title))
	}
	doc.textRecording(p)
	doc.textUnits(p)
	doc.textIntervals(p)
	doc.textEvents(p)
	doc.textStreams(p)
	doc.textPairs(p)
	doc.textWarnings(p)
	_, err := io.WriteString(w, p.b.String())
	return err
}

func (p *page) paint(code, text string) string {
	if !p.colour {
		return text
	}
	return code + text + plain
}

func (p *page) line(format string, args ...any) {
	p.b.WriteString(strings.TrimRight(fmt.Sprintf(format, args...), " "))
	p.b.WriteByte('\n')
}

// wide reports whether tables fit.
func (p *page) wide() bool { return p.width >= 80 }

func (p *page) head(title string) {
	if p.b.Len() > 0 {
		p.line("")
	}
	p.line("%s", p.paint(bold, title))
}

// wrap writes text after first, with the following lines after rest.
func (p *page) wrap(first, rest, text string) {
	line := first
	empty := true
	for _, word := range strings.Fields(text) {
		if !empty && length(line)+1+length(word) > p.width {
			p.line("%s", line)
			line, empty = rest, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	p.line("%s", line)
}

// length in columns, colours aside.
func length(s string) int {
	for _, code := range []string{bold, yellow, plain} {
		s = strings.ReplaceAll(s, code, "")
	}
	return utf8.RuneCountInString(s)
}

// item writes a name and what is to be said of it.
func (p *page) item(name, format string, args ...any) {
	first := fmt.Sprintf("  %-15s ", name)
	if utf8.RuneCountInString(name) > 15 {
		p.line("  %s", name)
		first = strings.Repeat(" ", 18)
	}
	p.wrap(first, strings.Repeat(" ", 18), fmt.Sprintf(format, args...))
}

func (doc *Document) textRecording(p *page) {
	r := doc.Recording
	p.head("Recording")
	silent := ""
	if doc.Rates.Silent > 0 {
		silent = fmt.Sprintf(" (%d silent)", doc.Rates.Silent)
	}
	p.item("units", "%d%s", r.Cells, silent)
	trials := "one stretch"
	if r.Trials > 1 {
		trials = fmt.Sprintf("%d trials (%s)", r.Trials, r.TrialMeaning)
	}
	p.item("duration", "%s s, %s", short(r.DurationS), trials)
	p.item("spikes", "%d", r.Spikes)
	p.item("events", "%d, of which %d are bursts (intervals up to %g ms, at least %d spikes)", r.Events, r.Bursts, doc.Settings.Bursts.MaxISIMS, doc.Settings.Bursts.MinSpikes)
	if len(doc.Streams) > 0 {
		p.item("streams", "%s, every %s ms", strings.Join(r.Streams, ", "), short(doc.Streams[0].DtMS))
	}
}

func (doc *Document) textUnits(p *page) {
	p.head("Rates")
	if doc.Recording.Spikes == 0 {
		p.line("  no spikes")
		return
	}
	if p.wide() {
		p.line("  %-17s%9s%10s%10s%10s%10s", "over units", "min", "25 %", "median", "75 %", "max")
	}
	row := func(name string, s Spread) {
		if !p.wide() {
			p.item(name, "%s to %s, half of the units %s to %s, median %s", short(s.Min), short(s.Max), short(s.Lower), short(s.Upper), short(s.Median))
			return
		}
		p.line("  %-17s%9s%10s%10s%10s%10s", name, short(s.Min), short(s.Lower), short(s.Median), short(s.Upper), short(s.Max))
	}
	row("spikes/s", doc.Rates.Spikes)
	row("events/s", doc.Rates.Events)
	row("burst fraction", doc.Rates.BurstFraction)
	if doc.Rates.SingleSpike > 0 {
		p.item("one spike only", "%s", ofUnits(doc.Rates.SingleSpike, doc.Recording.Cells))
	}
	if s := doc.Steadiness; s.Blocks[0].Known() {
		p.line("")
		p.item("all, over time", "%s  %s to %s spikes/s in tenths", bars(s.Blocks, 0), short(lowest(s.Blocks)), short(highest(s.Blocks)))
	}
}

func lowest(x []bench.Number) bench.Number  { low, _ := extremes(x); return low }
func highest(x []bench.Number) bench.Number { _, high := extremes(x); return high }

// bars draws values as a row of small columns that stand on low.
func bars(x []bench.Number, low bench.Number) string {
	const levels = "▁▂▃▄▅▆▇█"
	high := highest(x)
	var b strings.Builder
	for _, v := range x {
		at := 0
		if high > low && v.Known() {
			at = int(math.Round(float64((v - low) / (high - low) * 7)))
		}
		b.WriteString(string([]rune(levels)[at]))
	}
	return b.String()
}

// textIntervals draws the histogram, two bins a line, with the threshold as a
// rule between lines.
func (doc *Document) textIntervals(p *page) {
	iv := doc.Intervals
	p.head("Intervals between spikes")
	if iv.Total == 0 {
		p.line("  none")
		return
	}
	threshold := bench.Number(doc.Settings.Bursts.MaxISIMS)
	var lines []IntervalBin
	for i := 0; i < len(iv.Bins); {
		b := iv.Bins[i]
		i++
		// A pair ends at the threshold or an even number of bins from it.
		steps := int(math.Round(math.Log10(float64(b.HighMS/threshold)) * binsPerDecade))
		if steps%2 != 0 && i < len(iv.Bins) {
			b.Count += iv.Bins[i].Count
			b.HighMS = iv.Bins[i].HighMS
			i++
		}
		lines = append(lines, b)
	}
	most := int64(1)
	for _, b := range lines {
		most = max(most, b.Count)
	}
	room := p.width - 34
	ruled := false
	for _, b := range lines {
		if !ruled && b.LowMS > threshold*0.999 {
			p.line("  %s %s", fmt.Sprintf("%19s", fmt.Sprintf("%g ms", threshold)), "── burst threshold "+strings.Repeat("─", max(0, room-10)))
			ruled = true
		}
		bar := strings.Repeat("█", int(math.Round(float64(b.Count)/float64(most)*float64(room))))
		if bar == "" && b.Count > 0 {
			bar = "▏"
		}
		p.line("  %7s – %-7s ms%7.2f %% %s", short(b.LowMS), short(b.HighMS), 100*float64(b.Count)/float64(iv.Total), bar)
	}
	p.item("in bursts", "%.1f %% of %d intervals are within the threshold", 100*iv.WithinThreshold, iv.Total)
	if iv.ValleyMS.Known() {
		p.item("valley", "near %.2g ms (void %.2f; 0.7 and more is a clear one)", iv.ValleyMS, iv.Void)
	} else {
		p.item("valley", "none that is clear (void %.2f; 0.7 would be)", iv.Void)
	}
}

func (doc *Document) textEvents(p *page) {
	s, r := doc.Sizes, doc.Recording
	p.head("Events and bursts")
	if r.Events == 0 {
		p.line("  none")
		return
	}
	p.item("of all events", "%.1f %% single spikes, %.1f %% doublets, %.1f %% triplets, %.1f %% longer", 100*s.Singlets, 100*s.Doublets, 100*s.Triplets, 100*s.Longer)
	p.item("burst fraction", "%.3f: %s bursts/s of %s events/s", r.BurstFraction, short(bench.Number(r.Bursts)/r.DurationS), short(bench.Number(r.Events)/r.DurationS))
	p.item("by chance", "%.3f in cells without bursts at these event rates (1 − e^(−rate × %g ms))", r.ChanceBurstFraction, doc.Settings.Bursts.MaxISIMS)
}

func (doc *Document) textStreams(p *page) {
	p.head("Streams")
	if p.wide() {
		p.line("  %-14s%10s%10s%10s%10s%10s%12s", "", "mean", "sd", "skewness", "kurtosis", "band Hz", "independent")
	}
	for _, s := range doc.Streams {
		name := s.Stream
		if s.Measure != "" {
			name += ", " + s.Measure
		}
		if !p.wide() {
			p.item(name, "mean %s, sd %s, skewness %.2f, excess kurtosis %.2f, band to %s Hz, worth %.0f independent values",
				short(s.shownMean()), short(s.SD), s.Skewness, s.ExcessKurtosis, short(s.BandHz), s.Independent)
			continue
		}
		if utf8.RuneCountInString(name) > 14 {
			p.line("  %s", name)
			name = ""
		}
		p.line("  %-14s%10s%10s%10.2f%10.2f%10s%12s", name, short(s.shownMean()), short(s.SD), s.Skewness, s.ExcessKurtosis, short(s.BandHz), fmt.Sprintf("%.0f", s.Independent))
	}
	for _, s := range doc.Streams {
		if len(s.Spectrum) == 0 {
			continue
		}
		db := make([]bench.Number, len(s.Spectrum))
		for i, b := range s.Spectrum {
			db[i] = max(b.DB, -40)
			if !b.DB.Known() {
				db[i] = -40
			}
		}
		top := short(s.Spectrum[len(db)-1].HighHz)
		if !p.wide() { // half as many bands
			for i := 0; i+1 < len(db); i += 2 {
				db[i/2] = max(db[i], db[i+1])
			}
			db = db[:len(db)/2]
		}
		p.item(s.Stream, "%s  power from 0 to %s Hz, 40 dB from bottom to top", bars(db, -40), top)
		if s.OverTime.Blocks[0].Known() {
			p.item("", "%s  mean in tenths: %s to %s", bars(s.OverTime.Blocks, lowest(s.OverTime.Blocks)), short(lowest(s.OverTime.Blocks)), short(highest(s.OverTime.Blocks)))
		}
	}
	for _, c := range doc.Correlations {
		p.item("correlation", "%s with %s: %.3f (p = %s)", c.Streams[0], c.Streams[1], c.Correlation, probability(c.PValue))
	}
}

// shownMean is the mean without the rounding error of a mean of zero.
func (s Stream) shownMean() bench.Number {
	if math.Abs(float64(s.Mean)) < 1e-9*float64(s.SD) {
		return 0
	}
	return s.Mean
}

func (doc *Document) textPairs(p *page) {
	c := doc.Pairs
	if c.Units == 0 {
		return
	}
	p.head("Pairs of units")
	p.item("compared", "%d units over %s s", c.Units, short(c.Seconds))
	p.item("followers", "%s in which one unit follows the other as the rest of a burst would", pairs(c.Followers))
	p.item("copies", "%s with common spikes", pairs(c.Copies))
	for _, f := range c.Found[:min(len(c.Found), 5)] {
		word := "after"
		if f.Kind == "copy" {
			word = "with"
		}
		p.item("", "%s %s %s: %d times, %.0f expected (z = %.0f)", f.Then, word, f.First, f.Count, f.Expected, f.Z)
	}
}

func (doc *Document) textWarnings(p *page) {
	p.head("What is wrong with it")
	if len(doc.Warnings) == 0 {
		p.line("  nothing was found")
		return
	}
	for _, severity := range []estimators.Severity{estimators.Weak, estimators.Note} {
		for _, w := range doc.Warnings {
			if w.Severity != severity {
				continue
			}
			sign := "! "
			if severity == estimators.Note {
				sign = "- "
			}
			text := w.Text
			if w.Remedy != "" {
				text += ". " + strings.ToUpper(w.Remedy[:1]) + w.Remedy[1:]
			}
			about := w.About
			if severity == estimators.Weak {
				about = p.paint(yellow, about)
			}
			p.wrap("  "+sign, "    ", about+": "+text+".")
		}
	}
}

// short writes a number in three or four digits.
func short(n bench.Number) string {
	if !n.Known() {
		return "–"
	}
	v := math.Abs(float64(n))
	switch {
	case v == 0:
		return "0"
	case v >= 1e6 || v < 1e-3:
		return fmt.Sprintf("%.2e", float64(n))
	case v >= 100:
		return fmt.Sprintf("%.0f", float64(n))
	}
	return fmt.Sprintf("%.3g", float64(n))
}

func probability(p bench.Number) string {
	if !p.Known() {
		return "too short to tell"
	}
	if p < 1e-4 {
		return "below 0.0001"
	}
	return fmt.Sprintf("%.2g", float64(p))
}
