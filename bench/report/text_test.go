package report

import (
	"bytes"
	"errors"
	"flag"
	"fmt"
	"maps"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
	"unicode"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench"
)

// update rewrites the golden files: go test ./bench/report -run Golden -update.
var update = flag.Bool("update", false, "rewrite golden files")

// golden holds got against a file of testdata/report.
func golden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("..", "..", "testdata", "report", name)
	if *update {
		require.NoError(t, os.WriteFile(path, got, 0o666))
		return
	}
	want, err := os.ReadFile(path)
	require.NoError(t, err)
	assert.Equal(t, string(want), string(got), "%s: if the change is meant, run with -update", name)
}

// names of the documents, in order.
func names(docs map[string]*bench.Document) []string {
	return slices.Sorted(maps.Keys(docs))
}

func textOf(t *testing.T, doc *bench.Document, opt TextOptions) string {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, Text(&b, doc, opt))
	return b.String()
}

func TestGoldenText(t *testing.T) {
	docs := documents()
	for _, name := range names(docs) {
		for _, width := range []int{60, 80} {
			golden(t, fmt.Sprintf("%s-%d.txt", name, width), []byte(textOf(t, docs[name], TextOptions{Width: width})))
		}
	}
	golden(t, "demo-verbose-120.txt", []byte(textOf(t, docs["demo"], TextOptions{Width: 120, Verbose: true})))
}

func TestTextKeepsItsWidth(t *testing.T) {
	docs := documents()
	for _, name := range names(docs) {
		for _, width := range []int{40, 50, 60, 72, 80, 100, 120} {
			for _, verbose := range []bool{false, true} {
				for i, l := range strings.Split(textOf(t, docs[name], TextOptions{Width: width, Verbose: verbose}), "\n") {
					assert.LessOrEqual(t, displayWidth(l), width, "%s at %d, line %d: %q", name, width, i+1, l)
					assert.Equal(t, strings.TrimRight(l, " "), l, "%s at %d, line %d ends in spaces", name, width, i+1)
				}
			}
		}
	}
	assert.Equal(t, textOf(t, docs["demo"], TextOptions{}), textOf(t, docs["demo"], TextOptions{Width: 80}), "80 columns unless asked")
	assert.Equal(t, textOf(t, docs["demo"], TextOptions{Width: 40}), textOf(t, docs["demo"], TextOptions{Width: 7}), "at least 40")
	assert.Equal(t, textOf(t, docs["demo"], TextOptions{Width: 120}), textOf(t, docs["demo"], TextOptions{Width: 900}), "at most 120")
}

var ansi = regexp.MustCompile("\x1b\\[[0-9;]*m")

func TestColorOnlyRepeatsTheWords(t *testing.T) {
	docs := documents()
	for _, name := range names(docs) {
		for _, width := range []int{60, 80} {
			plainText := textOf(t, docs[name], TextOptions{Width: width})
			coloured := textOf(t, docs[name], TextOptions{Width: width, Color: true})
			assert.NotContains(t, plainText, "\x1b", name)
			assert.Contains(t, coloured, "\x1b[1m", name)
			assert.Equal(t, plainText, ansi.ReplaceAllString(coloured, ""), name)
		}
	}
}

func TestTextSaysWhatWasNotDetected(t *testing.T) {
	docs := documents()
	nothing := textOf(t, docs["nothing-detected"], TextOptions{})
	assert.Contains(t, nothing, "Not detected: none of the 7 codes is told apart from chance at 5 %.")
	assert.Equal(t, 7, strings.Count(nothing, "  not detected"), "in words, in each row of the ranking")
	assert.Contains(t, nothing, "-0.07†", "a negative value is printed as it is, and marked")
	assert.NotContains(t, nothing, "1 a")

	demo := textOf(t, docs["demo"], TextOptions{})
	assert.Contains(t, demo, "event-rate carries most, 81.1 bits/s, and more than any other.")
	assert.Contains(t, strings.Join(strings.Fields(demo), " "), "burst-fraction carries most, 66.6 bits/s, but cannot be told apart from burst-residual. Not detected: event-rate.")
	assert.Contains(t, demo, "330 of 330 intervals hold the closed-form truth (first-order, good to 1.8 %).")
	assert.Contains(t, demo, "1 warning at the end")

	one := *docs["single-stream"]
	one.Rows = one.Rows[:1]
	assert.Contains(t, textOf(t, &one, TextOptions{}), "spike-rate carries 9.5 bits/s.")
	lost := one.Rows[0]
	lost.Detected, lost.Rank, lost.Letters = false, nil, ""
	one.Rows = []bench.Row{lost}
	assert.Contains(t, textOf(t, &one, TextOptions{}), "spike-rate is not detected")

	assert.Contains(t, textOf(t, docs["empty"], TextOptions{}), "No code was ranked")
}

// Numbers are written out: no powers of ten, no NaN, no minus zero.
func TestTextWritesNumbersOut(t *testing.T) {
	docs := documents()
	odd := regexp.MustCompile(`\d[eE][+-]?\d|NaN|Inf|(^|\s)-0\.?0*([\s†]|$)`)
	for _, name := range names(docs) {
		for _, width := range []int{60, 120} {
			assert.NotRegexp(t, odd, textOf(t, docs[name], TextOptions{Width: width, Verbose: true}), name)
		}
	}
}

// What estimators of another quantity say stands under a heading of its own, and
// never in a table with the primary's numbers.
func TestQuantitiesAreKeptApart(t *testing.T) {
	demo := textOf(t, documents()["demo"], TextOptions{})
	_, window, found := strings.Cut(demo, "── Window information ──")
	require.True(t, found)
	window, _, _ = strings.Cut(window, "── Against the truth")
	assert.Contains(t, window, "plug-in")
	assert.NotContains(t, window, "multitaper")
	_, same, _ := strings.Cut(demo, "── By other estimators ──")
	same, _, _ = strings.Cut(same, "──")
	assert.NotContains(t, same, "plug-in")
}

// A wide table says which part of it is shown; the smallest and the largest size
// always are.
func TestSizesThatDoNotFit(t *testing.T) {
	narrow := textOf(t, documents()["demo"], TextOptions{Width: 60})
	assert.Contains(t, narrow, "of 11 columns fit this width")
	for _, l := range strings.Split(narrow, "\n") {
		if strings.HasPrefix(l, `code \ cells`) {
			sizes := strings.Fields(l)[3:]
			assert.Equal(t, "1", sizes[0])
			assert.Equal(t, "1,024", sizes[len(sizes)-1])
		}
	}
	assert.NotContains(t, textOf(t, documents()["demo"], TextOptions{Width: 120}), "columns fit this width")
}

// Names from files reach no medium with control characters in them.
func TestHostileNamesAreHarmless(t *testing.T) {
	doc := documents()["hostile-names"]
	for form, render := range map[string]func(*bytes.Buffer) error{
		"text":     func(b *bytes.Buffer) error { return Text(b, doc, TextOptions{Verbose: true}) },
		"markdown": func(b *bytes.Buffer) error { return Markdown(b, doc) },
		"latex":    func(b *bytes.Buffer) error { return LaTeX(b, doc) },
		"csv":      func(b *bytes.Buffer) error { return CSV(b, doc) },
		"joint":    func(b *bytes.Buffer) error { return JointCSV(b, doc) },
	} {
		var b bytes.Buffer
		require.NoError(t, render(&b))
		for _, r := range b.String() {
			if r != '\n' && (unicode.IsControl(r) || unicode.Is(unicode.Cf, r)) {
				t.Errorf("%s holds %U", form, r)
			}
		}
	}
}

type full struct{}

func (full) Write([]byte) (int, error) { return 0, errors.New("disk full") }

func TestErrorsOfTheWriterComeBack(t *testing.T) {
	doc := documents()["single-stream"]
	for form, err := range map[string]error{
		"text": Text(full{}, doc, TextOptions{}), "markdown": Markdown(full{}, doc), "latex": LaTeX(full{}, doc),
		"csv": CSV(full{}, doc), "joint": JointCSV(full{}, doc), "chance": ChanceCSV(full{}, doc), "json": JSON(full{}, doc),
	} {
		assert.ErrorContains(t, err, "disk full", form)
	}
}

func TestNumbersShowWhatTheirIntervalSupports(t *testing.T) {
	for _, c := range []struct {
		value, low, high bench.Number
		want             string
	}{
		{41.234, 40.134, 42.334, "41.2"}, {41.234, 41.18, 41.29, "41.23"}, {166.4, 161, 171, "166"}, {0.01234, 0.0112, 0.0134, "0.0123"},
		{-0.04, -0.19, 0.11, "-0.04"}, {-0.001, -0.2, 0.2, "0.00"}, {5, bench.None, bench.None, "5.00"}, {bench.None, 1, 2, "–"}, {0, 0, 0, "0.0"},
		{12345.6, 12000, 12700, "12346"}, {1e12, 1e12, 1e12, "1e+12"},
	} {
		assert.Equal(t, c.want, bits(c.value, c.low, c.high), "%v in %v to %v", c.value, c.low, c.high)
	}
	assert.Equal(t, "0.0000973", digits(0.0000973, 3))
	assert.Equal(t, "20", trimmed(20, 4))
	assert.Equal(t, "12.5", trimmed(12.5, 4))
	assert.Equal(t, "100", trimmed(100, 3))
	assert.Equal(t, "1.8 %", percent(0.018, 2))
	assert.Equal(t, "< 0.0001", probability(1e-9))
	assert.Equal(t, "4,915,200", count(4915200))
	assert.Equal(t, "-1,000", count(-1000))
	assert.Equal(t, "999", count(999))
}

func TestWrapping(t *testing.T) {
	assert.Equal(t, []string{"one two", "three"}, wrapped("one  two three", 8))
	assert.Equal(t, []string{"a-very-", "long-", "name"}, wrapped("a-very-long-name", 7))
	assert.Equal(t, []string{"漢字", "漢字"}, wrapped("漢字漢字", 5), "wide characters count twice")
	assert.Equal(t, []string{""}, wrapped("", 5))
}

func TestPlainNames(t *testing.T) {
	assert.Equal(t, "a\ufffd\ufffdb\ufffdc\ufffd", plain("a\x1b\nb\xffc\u202e"))
	assert.Equal(t, "höhe µV 漢", plain("höhe µV 漢"))
	assert.Equal(t, "a, b and c", listed([]string{"a", "b", "c"}))
	assert.Equal(t, "a or b", listedBy([]string{"a", "b"}, "or"))
}
