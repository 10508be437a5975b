// Package report renders a result: a bench.Document, and nothing else, becomes
// text, Markdown, CSV, JSON, LaTeX and figures. Nothing is estimated here and
// nothing is rerun, so a stored result gives the same report as a fresh one.
//
// A report is made in two steps. The document is first laid out as a list of
// blocks (headings, paragraphs, tables, warnings), which say what is told and in
// which order: the headline, the verdict, bits/s by ensemble size, pairs,
// partial information, chance bursts, other estimators, truth, warnings. The
// blocks are then written for the medium: Text fits tables to a width, Markdown
// and LaTeX escape what their syntax would take for their own. CSV and JSON are
// the document itself, field by field.
//
// Names come from users' files. Wherever they are shown, control and formatting
// characters are replaced, and what the medium would interpret is escaped.
package report
