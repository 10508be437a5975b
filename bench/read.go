package bench

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"

	"codeassay/scenarios"
)

// readKeys walks a valid TOML document, refuses keys that a study does not have
// and values of a wrong type, and returns the line of each key.
func readKeys(file string, text []byte) (map[string]int, *Fault) {
	w := keyWalk{file: file, keys: Keys(), lines: map[string]int{}}
	w.parser.Reset(text)
	var table []string
	for w.parser.NextExpression() {
		e := w.parser.Expression()
		path, line := w.path(e)
		switch e.Kind {
		case unstable.KeyValue:
			w.entry(append(slices.Clone(table), path...), e.Value(), line)
		default:
			table = path
			w.table(path, line, e.Kind == unstable.ArrayTable)
		}
		if w.fault != nil {
			return nil, w.fault
		}
	}
	return w.lines, nil
}

type keyWalk struct {
	parser unstable.Parser
	file   string
	keys   []Key
	lines  map[string]int
	codes  int // [[code]] tables so far
	fault  *Fault
}

// path is the dotted key of an expression and the line it stands on.
func (w *keyWalk) path(e *unstable.Node) (path []string, line int) {
	for it := e.Key(); it.Next(); {
		if line == 0 {
			line = w.parser.Shape(it.Node().Raw).Start.Line
		}
		path = append(path, string(it.Node().Data))
	}
	return path, line
}

func (w *keyWalk) refuse(line int, format string, args ...any) {
	if w.fault == nil {
		w.fault = &Fault{File: w.file, Line: line, Text: fmt.Sprintf(format, args...)}
	}
}

// table opens [path], or [[path]] where many is set.
func (w *keyWalk) table(path []string, line int, many bool) {
	name := strings.Join(path, ".")
	shown := bracketed(name, many)
	switch {
	case !slices.Contains(tables, name):
		w.refuse(line, "%s: unknown table%s", shown, suggest(name, tables[1:], bracket))
	case many != (name == "code"):
		w.refuse(line, "%s is written %s", shown, bracket(name))
	case many:
		w.codes++
		w.lines[fmt.Sprintf("code.%d", w.codes-1)] = line
	default:
		w.lines[name] = line
	}
}

func bracketed(name string, many bool) string {
	if many {
		return "[[" + name + "]]"
	}
	return "[" + name + "]"
}

// entry checks path = value. An inline table stands for its entries.
func (w *keyWalk) entry(path []string, value *unstable.Node, line int) {
	if value.Kind == unstable.InlineTable && len(path) == 1 && path[0] != "code" && slices.Contains(tables, path[0]) {
		w.lines[path[0]] = line
		for it := value.Children(); it.Next(); {
			inner, at := w.path(it.Node())
			w.entry(append(slices.Clone(path), inner...), it.Node().Value(), at)
		}
		return
	}
	table, name := "", path[0]
	if len(path) == 2 {
		table, name = path[0], path[1]
	}
	if len(path) == 1 && slices.Contains(tables[1:], name) {
		w.refuse(line, "%s is a table: write %s on a line of its own, and its keys below", name, bracket(name))
		return
	}
	if len(path) > 2 || !slices.Contains(tables, table) {
		w.refuse(line, "%s: unknown key%s", strings.Join(path, "."), suggest(path[0], tables[1:], bracket))
		return
	}
	at := slices.IndexFunc(w.keys, func(k Key) bool { return k.Table == table && k.Name == name })
	if at < 0 {
		w.refuse(line, "%s: unknown key%s", place(table, name), w.suggestKey(table, name))
		return
	}
	key := w.keys[at]
	if shown, want := w.mismatch(key.Type, value); shown != "" {
		w.refuse(line, "%s = %s: %s is needed", key.Place(), shown, want)
		return
	}
	full := strings.Join(path, ".")
	if table == "code" {
		full = fmt.Sprintf("code.%d.%s", w.codes-1, name)
	}
	w.lines[full] = line
}

// suggestKey says which key was meant: the nearest of the table, or the same in
// another table, or all that the table has.
func (w *keyWalk) suggestKey(table, name string) string {
	var own []string
	for _, k := range w.keys {
		if k.Table == table {
			own = append(own, k.Name)
		} else if k.Name == name {
			return fmt.Sprintf("; it belongs in %s", bracketOrTop(k.Table))
		}
	}
	return suggest(name, own, func(s string) string { return s })
}

func bracketOrTop(table string) string {
	if table == "" {
		return "the top, before any table"
	}
	return bracket(table)
}

// suggest ends a message about an unknown name: the nearest known one, or all.
func suggest(name string, known []string, show func(string) string) string {
	if near := scenarios.Nearest(name, known); near != "" {
		return fmt.Sprintf("; did you mean %s?", show(near))
	}
	shown := make([]string, len(known))
	for i, k := range known {
		shown[i] = show(k)
	}
	return "; there are " + strings.Join(shown, ", ")
}

// mismatch returns what stands in place of a value of type t, and what is
// needed, or "" where the value is of the type.
func (w *keyWalk) mismatch(t KeyType, v *unstable.Node) (shown, want string) {
	want = t.String()
	element := func(of KeyType) (string, string) {
		if v.Kind != unstable.Array {
			return w.show(v), want
		}
		for it := v.Children(); it.Next(); {
			if bad, _ := w.mismatch(of, it.Node()); bad != "" {
				return w.show(v), want
			}
		}
		return "", ""
	}
	ok := false
	switch t {
	case Text:
		ok = v.Kind == unstable.String
	case Switch:
		ok = v.Kind == unstable.Bool
	case Whole:
		ok = v.Kind == unstable.Integer && wholeInRange(string(v.Data))
	case Number64:
		ok = v.Kind == unstable.Integer || v.Kind == unstable.Float && finite(string(v.Data))
		if v.Kind == unstable.Float && !ok {
			want = "a finite number"
		}
	case Texts:
		return element(Text)
	case Wholes:
		return element(Whole)
	case Numbers:
		return element(Number64)
	case Bands:
		if v.Kind != unstable.Array {
			return w.show(v), want
		}
		for it := v.Children(); it.Next(); {
			edge := it.Node()
			if edge.Kind == unstable.Array {
				if bad, _ := w.mismatch(Numbers, edge); bad != "" || children(edge) != 2 {
					return w.show(v), want
				}
			} else if bad, _ := w.mismatch(Number64, edge); bad != "" {
				return w.show(v), want
			}
		}
		ok = true
	}
	if ok {
		return "", ""
	}
	return w.show(v), want
}

func children(v *unstable.Node) (n int) {
	for it := v.Children(); it.Next(); {
		n++
	}
	return n
}

// wholeInRange accepts what fits in the settings: 32 bits are enough for all but
// a seed, and a seed has no sign.
func wholeInRange(text string) bool {
	n, err := strconv.ParseInt(strings.ReplaceAll(text, "_", ""), 0, 64)
	return err == nil && n >= 0
}

func finite(text string) bool {
	return !strings.Contains(text, "nan") && !strings.Contains(text, "inf")
}

// show writes a value as it stands in the file, lists in short.
func (w *keyWalk) show(v *unstable.Node) string {
	switch v.Kind {
	case unstable.Array:
		var parts []string
		for it := v.Children(); it.Next(); {
			parts = append(parts, w.show(it.Node()))
		}
		if len(parts) > 6 {
			parts = append(parts[:6], "…")
		}
		return "[" + strings.Join(parts, ", ") + "]"
	case unstable.InlineTable:
		return "{…}"
	case unstable.String:
		return strconv.Quote(string(v.Data))
	}
	return string(v.Data)
}
