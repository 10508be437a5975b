package inspect

import (
	"encoding/csv"
	"encoding/json"
	"io"
	"strconv"
	"strings"

	"codeassay/bench"
)

// JSON writes the document, indented, with a final line end.
func (doc *Document) JSON(w io.Writer) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(doc)
}

var columns = []string{"unit", "spikes", "spikes_per_s", "events", "events_per_s", "bursts", "burst_fraction", "chance_burst_fraction",
	"interval_cv", "intervals_below_1_ms", "drift_p_value"}

// cells is a unit's row; null writes what could not be computed, digits 0 all
// digits.
func (u Unit) cells(digits int, null string) []string {
	number := func(n bench.Number) string {
		switch {
		case !n.Known():
			return null
		case digits == 0:
			return strconv.FormatFloat(float64(n), 'g', -1, 64)
		}
		return strconv.FormatFloat(float64(n), 'g', digits, 64)
	}
	return []string{u.Unit, strconv.Itoa(u.Spikes), number(u.SpikesPerS), strconv.Itoa(u.Events), number(u.EventsPerS), strconv.Itoa(u.Bursts),
		number(u.BurstFraction), number(u.Chance), number(u.IntervalCV), strconv.Itoa(u.Below1MS), number(u.DriftP)}
}

// CSV writes a row a unit; an empty field could not be computed.
func (doc *Document) CSV(w io.Writer) error {
	c := csv.NewWriter(w)
	if err := c.Write(columns); err != nil {
		return err
	}
	for _, u := range doc.Rows {
		if err := c.Write(u.cells(0, "")); err != nil {
			return err
		}
	}
	c.Flush()
	return c.Error()
}

var markdown = strings.NewReplacer("|", `\|`, "*", `\*`, "_", `\_`, "`", "\\`", "<", `\<`, "[", `\[`, "#", `\#`, `\`, `\\`)

// Markdown writes a row a unit and the warnings below.
func (doc *Document) Markdown(w io.Writer) error {
	var b strings.Builder
	row := func(cells []string) {
		b.WriteString("|")
		for _, c := range cells {
			b.WriteString(" " + markdown.Replace(c) + " |")
		}
		b.WriteString("\n")
	}
	row(columns)
	b.WriteString("| ---" + strings.Repeat(" | ---:", len(columns)-1) + " |\n")
	doc = doc.printable()
	for _, u := range doc.Rows {
		row(u.cells(4, "–"))
	}
	if len(doc.Warnings) > 0 {
		b.WriteString("\n")
	}
	for _, x := range doc.Warnings {
		b.WriteString("- " + string(x.Severity) + ", " + markdown.Replace(x.About+": "+x.Text))
		if x.Remedy != "" {
			b.WriteString(" (" + markdown.Replace(x.Remedy) + ")")
		}
		b.WriteString("\n")
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// LaTeX writes a row a unit as a tabular.
func (doc *Document) LaTeX(w io.Writer) error {
	escape := strings.NewReplacer(`\`, `\textbackslash{}`, "_", `\_`, "%", `\%`, "&", `\&`, "#", `\#`, "$", `\$`, "{", `\{`, "}", `\}`,
		"~", `\textasciitilde{}`, "^", `\textasciicircum{}`)
	var b strings.Builder
	row := func(cells []string) {
		for i, c := range cells {
			if i > 0 {
				b.WriteString(" & ")
			}
			b.WriteString(escape.Replace(c))
		}
		b.WriteString(" \\\\\n")
	}
	b.WriteString("\\begin{tabular}{l" + strings.Repeat("r", len(columns)-1) + "}\n\\hline\n")
	row(columns)
	b.WriteString("\\hline\n")
	doc = doc.printable()
	for _, u := range doc.Rows {
		row(u.cells(4, "--"))
	}
	b.WriteString("\\hline\n\\end{tabular}\n")
	_, err := io.WriteString(w, b.String())
	return err
}
