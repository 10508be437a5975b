package files

import (
	"fmt"
	"slices"
	"strings"

	"codeassay/scenarios"
)

// find matches the header against the known columns. required of them must be
// there; where open is set, other names are allowed. It returns the index of
// each known column, −1 where absent.
func (t *text) find(known []string, required int, open bool) ([]int, error) {
	expected := known[0]
	for i, name := range known[1:] {
		if i+1 < required {
			expected += "," + name
		} else {
			expected += "[," + name + "]"
		}
	}
	if open {
		expected = "time_s,NAME,NAME…[,trial]"
	}
	if len(t.header) == 1 && t.header[0] == "" {
		return nil, fmt.Errorf("%s: the first row is empty; expected the header %s", t.path, expected)
	}
	at := make([]int, len(known))
	for i := range at {
		at[i] = -1
	}
	if len(t.header) == 1 {
		for _, mark := range []struct{ separator, name string }{{";", "semicolons"}, {"\t", "tabs"}} {
			if strings.Contains(t.header[0], mark.separator) {
				return nil, fmt.Errorf("%s: the columns are separated by %s: use commas, and points in decimals", t.path, mark.name)
			}
		}
	}
	complete := !slices.ContainsFunc(known[:required], func(name string) bool { return !slices.Contains(t.header, name) })
	for i, name := range t.header {
		if name == "" {
			return nil, fmt.Errorf("%s: column %d has no name; expected %s", t.path, i+1, expected)
		}
		if slices.Contains(t.header[:i], name) {
			return nil, fmt.Errorf("%s: two columns are named %q: rename one", t.path, name)
		}
		place := slices.Index(known, name)
		if place >= 0 {
			at[place] = i
		} else if !open && complete {
			return nil, fmt.Errorf("%s: column %q is not known%s; expected %s", t.path, name, hint(name, known), expected)
		}
	}
	for i := range required {
		if at[i] < 0 {
			return nil, fmt.Errorf("%s: no column %q%s; expected the header %s", t.path, known[i], found(known[i], t.header), expected)
		}
	}
	return at, nil
}

func hint(name string, known []string) string {
	if near := scenarios.Nearest(name, known); near != "" {
		return fmt.Sprintf(" (did you mean %q?)", near)
	}
	return ""
}

// found names what a header has in place of a missing column.
func found(missing string, header []string) string {
	if near := scenarios.Nearest(missing, header); near != "" {
		return fmt.Sprintf(" (nearest is %q)", near)
	}
	if len(header) <= 4 {
		return fmt.Sprintf(" (found %q)", header)
	}
	return ""
}
