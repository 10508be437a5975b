package report

import (
	"strings"
	"unicode/utf8"

	"github.com/olekukonko/tablewriter/pkg/twwidth"
)

// displayWidth is the widest of lines, in terminal columns.
func displayWidth(lines ...string) int {
	w := 0
	for _, l := range lines {
		w = max(w, twwidth.WidthWithOptions(l, narrow))
	}
	return w
}

// narrow counts characters of ambiguous width as one column wherever the program
// runs: a locale must not change the layout.
var narrow = twwidth.Options{EastAsianWidth: false}

// wrapped breaks text into lines of at most width columns, at spaces where it
// can and within words longer than a line.
func wrapped(text string, width int) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		if line != "" && displayWidth(line)+1+displayWidth(word) <= width {
			line += " " + word
			continue
		}
		if line != "" {
			lines = append(lines, line)
		}
		for displayWidth(word) > width {
			var head string
			head, word = broken(word, width)
			lines = append(lines, head)
		}
		line = word
	}
	if line != "" || lines == nil {
		lines = append(lines, line)
	}
	return lines
}

// broken splits a word that is wider than width after its last hyphen, dot or
// underscore within it, or else where the width ends.
func broken(word string, width int) (head, rest string) {
	cut, nice, w := 0, 0, 0
	for i, r := range word {
		w += displayWidth(string(r))
		if w > width && i > 0 {
			break
		}
		cut = i + utf8.RuneLen(r)
		if r == '-' || r == '_' || r == '.' {
			nice = cut
		}
	}
	if 2*nice > cut {
		cut = nice
	}
	return word[:cut], word[cut:]
}
