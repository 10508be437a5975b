package report

import (
	"encoding/json"
	"fmt"
	"io"

	"codeassay/bench"
	"codeassay/estimators"
)

// JSON writes doc, indented, with floats in shortest form; a list without
// entries is [] and what could not be computed is null. A setting that is NaN or
// infinite has no JSON form: it is an error, and nothing is written. Other errors
// are those of w.
func JSON(w io.Writer, doc *bench.Document) error {
	out, err := json.MarshalIndent(whole(doc), "", "  ")
	if err != nil {
		return fmt.Errorf("report: the result has no JSON form: %w", err)
	}
	_, err = w.Write(append(out, '\n'))
	return err
}

// whole is a copy of doc in which lists are never nil.
func whole(doc *bench.Document) *bench.Document {
	d := *doc
	d.Recording.Streams = filled(d.Recording.Streams)
	d.Rows, d.Chance = wholeRows(d.Rows), wholeRows(d.Chance)
	d.Joint = append([]bench.JointRow{}, d.Joint...)
	for i := range d.Joint {
		r := &d.Joint[i]
		r.Streams, r.Codes, r.Warnings = filled(r.Streams), filled(r.Codes), filled(r.Warnings)
	}
	d.Spectra = append([]bench.Spectrum{}, d.Spectra...)
	for i := range d.Spectra {
		s := &d.Spectra[i]
		s.FreqHz, s.Coherence, s.CILow, s.CIHigh = filled(s.FreqHz), filled(s.Coherence), filled(s.CILow), filled(s.CIHigh)
	}
	d.Warnings = filled[estimators.Warning](d.Warnings)
	return &d
}

func wholeRows(rows []bench.Row) []bench.Row {
	out := append([]bench.Row{}, rows...)
	for i := range out {
		out[i].Given, out[i].Warnings = filled(out[i].Given), filled(out[i].Warnings)
	}
	return out
}

func filled[T any](list []T) []T {
	if list == nil {
		return []T{}
	}
	return list
}
