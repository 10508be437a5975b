package main

import (
	"fmt"
	"strings"

	"codeassay/bench"
	"codeassay/bench/catalog"
)

// keysHelp documents every key of a study for rank --help, at most 80 columns
// wide.
func keysHelp() string {
	var b strings.Builder
	b.WriteString("Keys of a study (TOML; all but the recording may be left out):\n")
	table := "none yet"
	for _, k := range bench.Keys() {
		if k.Table != table {
			table = k.Table
			switch table {
			case "":
			case "code":
				b.WriteString("\n  [[code]]  a code of your own; any number of them\n")
			default:
				fmt.Fprintf(&b, "\n  [%s]\n", table)
			}
		}
		doc := k.Doc
		if k.Default != "" {
			doc += " (default " + k.Default + ")"
		}
		wrapInto(&b, fmt.Sprintf("    %-20s ", k.Name), strings.Repeat(" ", 25), doc)
	}
	for _, list := range []struct {
		head    string
		entries []catalog.Entry
	}{{"Codes", catalog.BuiltInCodes()}, {"Estimators", catalog.Estimators()}, {"Scenarios", catalog.Scenarios()}} {
		fmt.Fprintf(&b, "\n%s:\n", list.head)
		for _, e := range list.entries {
			wrapInto(&b, fmt.Sprintf("    %-23s ", e.Name), strings.Repeat(" ", 28), e.Describe)
		}
	}
	return strings.TrimRight(b.String(), "\n")
}

// wrapInto breaks text at 80 columns, after first and then after rest.
func wrapInto(b *strings.Builder, first, rest, text string) {
	line, used := first, len(first)
	for i, word := range strings.Fields(text) {
		n := len([]rune(word))
		if i > 0 && used+1+n > plainWidth {
			b.WriteString(strings.TrimRight(line, " ") + "\n")
			line, used = rest, len(rest)
		} else if i > 0 {
			line, used = line+" ", used+1
		}
		line, used = line+word, used+n
	}
	b.WriteString(strings.TrimRight(line, " ") + "\n")
}
