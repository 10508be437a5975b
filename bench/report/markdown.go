package report

import (
	"bytes"
	"fmt"
	"io"
	"regexp"
	"strings"

	"codeassay/bench"
)

// Markdown writes doc in CommonMark with pipe tables, with every ensemble size
// and column. The error is that of w.
func Markdown(w io.Writer, doc *bench.Document) error {
	var out bytes.Buffer
	list := false
	for _, b := range layOut(doc, false) {
		_, isItem := b.(item)
		if out.Len() > 0 && !(isItem && list) {
			out.WriteByte('\n')
		}
		list = isItem
		switch b := b.(type) {
		case heading:
			fmt.Fprintf(&out, "%s %s\n", strings.Repeat("#", b.level), markdownText(b.text))
		case paragraph:
			fmt.Fprintf(&out, "%s\n", markdownText(b.text))
		case item:
			lead := ""
			if b.lead != "" {
				lead = "**" + markdownText(b.lead) + "**: "
			}
			fmt.Fprintf(&out, "- %s%s\n", lead, markdownText(b.text))
		case table:
			markdownTable(&out, b)
		}
	}
	_, err := w.Write(out.Bytes())
	return err
}

func markdownTable(out *bytes.Buffer, t table) {
	line := func(each func(i int) string) {
		for i := range t.columns {
			out.WriteString("| " + each(i) + " ")
		}
		out.WriteString("|\n")
	}
	line(func(i int) string { return markdownText(t.columns[i].name()) })
	line(func(i int) string {
		if t.columns[i].number {
			return "---:"
		}
		return ":---"
	})
	for _, row := range t.rows {
		line(func(i int) string {
			text := markdownText(row[i].text)
			if row[i].tone == strong {
				return "**" + text + "**"
			}
			return text
		})
	}
}

var (
	markdownSpecial = regexp.MustCompile("[\\\\`*_\\[\\]<>|~#&$]")
	// markdownOpening is what would make a block of a line that begins with it.
	markdownOpening = regexp.MustCompile(`^([-+=]|[0-9]+[.)])(\s|$)`)
	// autolinked are bare addresses, which some readers turn into links.
	autolinked = regexp.MustCompile(`(?i)(https?|ftp|www)([:.])`)
)

// markdownText escapes what CommonMark, its table extension, mathematics or
// HTML in it would take for their own.
func markdownText(s string) string {
	s = markdownSpecial.ReplaceAllString(s, `\$0`)
	s = autolinked.ReplaceAllString(s, `$1\$2`)
	return markdownOpening.ReplaceAllStringFunc(s, func(m string) string {
		i := strings.IndexAny(m, "-+=.)")
		return m[:i] + `\` + m[i:]
	})
}
