package main

import (
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"runtime"
	"strconv"
	"strings"

	"codeassay/bench"
	"codeassay/bench/catalog"
	"codeassay/bench/rank"
	"codeassay/decoders"
	"codeassay/scenarios"
	"codeassay/scenarios/synthetic"
)

// truthDocument is what a scenario's linear codes truly carry.
type truthDocument struct {
	Tool          string                `json:"tool"`
	Version       string                `json:"version"`
	Command       string                `json:"command"`
	Title         string                `json:"title,omitempty"`
	Seed          uint64                `json:"seed"`
	Platform      string                `json:"platform"`
	Recording     truthRecording        `json:"recording"`
	Scenario      bench.ScenarioInForce `json:"scenario"`
	Kind          string                `json:"kind"`           // exact, first-order or reference
	RelativeError bench.Number          `json:"relative_error"` // of the truth itself
	Rows          []truthRow            `json:"rows"`
	Joint         []truthJoint          `json:"joint"`
}

type truthRecording struct {
	Cells     int          `json:"cells"`
	DurationS bench.Number `json:"duration_s"`
	Streams   []string     `json:"streams"`
}

type truthRow struct {
	Stream    string       `json:"stream"`
	Given     []string     `json:"given"`
	Code      string       `json:"code"`
	Cells     int          `json:"cells"`
	BandLowHz bench.Number `json:"band_low_hz"`
	BandHz    bench.Number `json:"band_hz"`
	BitsPerS  bench.Number `json:"truth_bits_per_s"`
}

type truthJoint struct {
	Streams   []string     `json:"streams"`
	Codes     []string     `json:"codes"`
	Cells     int          `json:"cells"`
	BandLowHz bench.Number `json:"band_low_hz"`
	BandHz    bench.Number `json:"band_hz"`
	BitsPerS  bench.Number `json:"truth_bits_per_s"`
}

// newTruthDocument states the truth of the study's linear codes and pairs at
// every ensemble size, in every band. Ratios have no closed form and are left
// out.
func newTruthDocument(study bench.Study, scenario *synthetic.PairedDrive) (*truthDocument, error) {
	codes, pairs, err := catalog.Codes(study)
	if err != nil {
		return nil, err
	}
	truth := truthOf(scenario)
	doc := &truthDocument{Tool: "codeassay", Version: version(), Command: "simulate", Title: study.Title, Seed: study.Seed, Platform: runtime.GOARCH,
		Recording: truthRecording{Cells: len(scenario.Units()), DurationS: bench.Number(scenarios.Seconds(scenario.Trials()[0].Duration)), Streams: []string{}},
		Scenario:  *catalog.InForce(scenario), Kind: truth.Kind, RelativeError: bench.Number(truth.RelativeError), Rows: []truthRow{}, Joint: []truthJoint{}}
	for _, s := range scenario.Streams() {
		doc.Recording.Streams = append(doc.Recording.Streams, s.Name)
	}
	for _, cells := range sizesOf(study, len(scenario.Units())) {
		for _, band := range bandsOf(study, scenario) {
			doc.add(truth, codes, pairs, cells, band)
		}
	}
	return doc, nil
}

func (d *truthDocument) add(truth *rank.Truth, codes []decoders.Code, pairs [][2]int, cells int, band bench.Band) {
	low, high := bench.Number(band.Low), bench.Number(band.High)
	for s, stream := range d.Recording.Streams {
		for _, c := range codes {
			if w, ok := truth.Weights(c); ok {
				d.Rows = append(d.Rows, truthRow{stream, []string{}, c.Name, cells, low, high, truth.Rate([][5]float64{w}, cells, band, s, false)})
			}
		}
	}
	for _, pair := range pairs {
		a, linearA := truth.Weights(codes[pair[0]])
		b, linearB := truth.Weights(codes[pair[1]])
		if !linearA || !linearB {
			continue
		}
		w := [][5]float64{a, b}
		d.Joint = append(d.Joint, truthJoint{d.Recording.Streams, []string{codes[pair[0]].Name, codes[pair[1]].Name}, cells, low, high, truth.Rate(w, cells, band, -1, false)})
	}
}

// sizesOf are the ensemble sizes of a study: 1, 2, 4, … and all cells unless
// given.
func sizesOf(study bench.Study, cells int) []int {
	if len(study.Sweep.Cells) > 0 {
		return study.Sweep.Cells
	}
	var out []int
	for n := 1; n < cells; n *= 2 {
		out = append(out, n)
	}
	return append(out, cells)
}

// bandsOf are the bands of a study: the cut-off of each stream unless given.
func bandsOf(study bench.Study, scenario *synthetic.PairedDrive) []bench.Band {
	if len(study.Sweep.BandsHz) > 0 {
		return study.Sweep.BandsHz
	}
	var out []bench.Band
	for _, s := range scenario.Streams() {
		b := bench.Band{High: s.BandHz}
		if len(out) == 0 || out[0] != b {
			out = append(out, b)
		}
	}
	return out
}

func (d *truthDocument) json(w io.Writer) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(d)
}

// table lists the rows and the pairs, numbers with so many digits (−1: all).
func (d *truthDocument) table(digits int) [][]string {
	number := func(n bench.Number) string {
		if !n.Known() {
			return ""
		}
		return strconv.FormatFloat(float64(n), 'g', digits, 64)
	}
	out := [][]string{{"stream", "code", "cells", "band_low_hz", "band_hz", "truth_bits_per_s"}}
	for _, r := range d.Rows {
		out = append(out, []string{r.Stream, r.Code, strconv.Itoa(r.Cells), number(r.BandLowHz), number(r.BandHz), number(r.BitsPerS)})
	}
	for _, r := range d.Joint {
		out = append(out, []string{strings.Join(r.Streams, "+"), strings.Join(r.Codes, "+"), strconv.Itoa(r.Cells), number(r.BandLowHz), number(r.BandHz), number(r.BitsPerS)})
	}
	return out
}

func (d *truthDocument) csv(w io.Writer) error {
	return csv.NewWriter(w).WriteAll(d.table(-1))
}

// text shows the largest ensemble; the files have all.
func (d *truthDocument) text(w io.Writer) error {
	var b strings.Builder
	s := d.Scenario
	fmt.Fprintf(&b, "%s: %d cells, %g s, seed %d\n", s.Name, d.Recording.Cells, float64(d.Recording.DurationS), d.Seed)
	fmt.Fprintf(&b, "events %g/s (depth %g), burst share %g (depth %g), dead time %g ms\n\n", s.EventRateHz, s.EventDepth, s.BurstShare, s.BurstDepth, s.DeadTimeMS)
	fmt.Fprintf(&b, "Truth of all %d cells, closed form (%s, good to %.2g %%), bits/s:\n", d.Recording.Cells, d.Kind, 100*float64(d.RelativeError))
	for _, row := range d.table(4)[1:] {
		if row[2] == strconv.Itoa(d.Recording.Cells) {
			fmt.Fprintf(&b, "  %-16s %-34s %9s Hz %9s\n", row[0], row[1], row[3]+"–"+row[4], row[5])
		}
	}
	_, err := io.WriteString(w, b.String())
	return err
}

func (d *truthDocument) markdown(w io.Writer) error {
	var b strings.Builder
	for i, row := range d.table(4) {
		for _, cell := range row {
			b.WriteString("| " + strings.ReplaceAll(cell, "|", "\\|") + " ")
		}
		b.WriteString("|\n")
		if i == 0 {
			b.WriteString("| --- | --- | ---: | ---: | ---: | ---: |\n")
		}
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// latexText escapes what LaTeX would take for its own.
var latexText = strings.NewReplacer(`\`, `\textbackslash{}`, "_", `\_`, "%", `\%`, "&", `\&`, "#", `\#`, "$", `\$`, "{", `\{`, "}", `\}`,
	"~", `\textasciitilde{}`, "^", `\textasciicircum{}`)

func (d *truthDocument) latex(w io.Writer) error {
	var b strings.Builder
	b.WriteString("\\begin{tabular}{llrrrr}\n\\hline\n")
	for i, row := range d.table(4) {
		for j, cell := range row {
			if j > 0 {
				b.WriteString(" & ")
			}
			b.WriteString(latexText.Replace(cell))
		}
		b.WriteString(" \\\\\n")
		if i == 0 {
			b.WriteString("\\hline\n")
		}
	}
	b.WriteString("\\hline\n\\end{tabular}\n")
	_, err := io.WriteString(w, b.String())
	return err
}
