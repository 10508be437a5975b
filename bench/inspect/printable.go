package inspect

import (
	"slices"
	"strings"
	"unicode"
)

// printable is the document with every name and text from users' files fit for a
// terminal: control and formatting characters are replaced by "·".
func (doc *Document) printable() *Document {
	out := *doc
	out.Title = printable(doc.Title)
	out.Recording.Streams = slices.Clone(doc.Recording.Streams)
	for i := range out.Recording.Streams {
		out.Recording.Streams[i] = printable(out.Recording.Streams[i])
	}
	out.Rows = slices.Clone(doc.Rows)
	for i := range out.Rows {
		out.Rows[i].Unit = printable(out.Rows[i].Unit)
	}
	out.Streams = slices.Clone(doc.Streams)
	for i := range out.Streams {
		out.Streams[i].Stream, out.Streams[i].Measure = printable(out.Streams[i].Stream), printable(out.Streams[i].Measure)
	}
	out.Correlations = slices.Clone(doc.Correlations)
	for i := range out.Correlations {
		pair := &out.Correlations[i].Streams
		pair[0], pair[1] = printable(pair[0]), printable(pair[1])
	}
	out.Pairs.Found = slices.Clone(doc.Pairs.Found)
	for i := range out.Pairs.Found {
		p := &out.Pairs.Found[i]
		p.First, p.Then = printable(p.First), printable(p.Then)
	}
	out.Warnings = slices.Clone(doc.Warnings)
	for i := range out.Warnings {
		w := &out.Warnings[i]
		w.About, w.Text, w.Remedy = printable(w.About), printable(w.Text), printable(w.Remedy)
	}
	return &out
}

func printable(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsPrint(r) {
			return r
		}
		return '·'
	}, s)
}
