package report

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// plain makes a string from a user's file harmless to show: control characters
// (terminal escapes, line breaks), invisible formatting characters (text
// direction overrides, zero-width joiners) and invalid UTF-8 each become U+FFFD.
func plain(s string) string {
	return strings.Map(func(r rune) rune {
		if r == utf8.RuneError || unicode.IsControl(r) || unicode.In(r, unicode.Cf, unicode.Zl, unicode.Zp) {
			return utf8.RuneError
		}
		return r
	}, s)
}

// plainAll is plain for each of names.
func plainAll(names []string) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = plain(n)
	}
	return out
}

// listed joins names as a sentence does: "a", "a and b", "a, b and c".
func listed(names []string) string { return listedBy(names, "and") }

func listedBy(names []string, word string) string {
	switch n := len(names); n {
	case 0:
		return ""
	case 1:
		return names[0]
	default:
		return strings.Join(names[:n-1], ", ") + " " + word + " " + names[n-1]
	}
}
