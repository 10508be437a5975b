package report

import (
	"encoding/csv"
	"fmt"
	"io"
	"reflect"
	"strconv"
	"strings"

	"codeassay/bench"
	"codeassay/estimators"
)

// CSV writes the rows of doc, one a line, under a header of the keys of the JSON
// form. Lists are joined by "+", what could not be computed is empty, floats are
// in shortest form, warnings are joined by " | ". A text that a spreadsheet would
// run as a formula gets an apostrophe before it. The error is that of w.
func CSV(w io.Writer, doc *bench.Document) error { return writeCSV(w, doc.Rows) }

// JointCSV writes the joint rows of doc as CSV does the others.
func JointCSV(w io.Writer, doc *bench.Document) error { return writeCSV(w, doc.Joint) }

// ChanceCSV writes the rows of the burst-free surrogate as CSV does the data's.
func ChanceCSV(w io.Writer, doc *bench.Document) error { return writeCSV(w, doc.Chance) }

// writeCSV writes a slice of structs by their JSON keys.
func writeCSV[T any](w io.Writer, rows []T) error {
	out := csv.NewWriter(w)
	kind := reflect.TypeFor[T]()
	line := make([]string, kind.NumField())
	for i := range line {
		line[i], _, _ = strings.Cut(kind.Field(i).Tag.Get("json"), ",")
	}
	if err := out.Write(line); err != nil {
		return err
	}
	for _, row := range rows {
		v := reflect.ValueOf(row)
		for i := range line {
			line[i] = csvField(v.Field(i).Interface())
		}
		if err := out.Write(line); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
}

// csvField panics for a type that no row has.
func csvField(x any) string {
	switch x := x.(type) {
	case bench.Number:
		if !x.Known() {
			return ""
		}
		return strconv.FormatFloat(float64(x), 'g', -1, 64)
	case string:
		return harmless(x)
	case estimators.Quantity:
		return harmless(string(x))
	case []string:
		return harmless(strings.Join(x, "+"))
	case int:
		return strconv.Itoa(x)
	case *int:
		if x == nil {
			return ""
		}
		return strconv.Itoa(*x)
	case bool:
		return strconv.FormatBool(x)
	case []estimators.Warning:
		parts := make([]string, len(x))
		for i, w := range x {
			parts[i] = fmt.Sprintf("%s: %s: %s (%s)", w.Severity, w.About, w.Text, w.Remedy)
		}
		return harmless(strings.Join(parts, " | "))
	}
	panic(fmt.Sprintf("report: no CSV form for a field of type %T", x))
}

// harmless keeps spreadsheets from running a text as a formula.
func harmless(s string) string {
	s = plain(s)
	if s != "" && strings.ContainsRune("=+-@|%", rune(s[0])) {
		return "'" + s
	}
	return s
}
