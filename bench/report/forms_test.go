package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench"
)

func markdown(t *testing.T, doc *bench.Document) string {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, Markdown(&b, doc))
	return b.String()
}

func latex(t *testing.T, doc *bench.Document) string {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, LaTeX(&b, doc))
	return b.String()
}

func jsonOf(t *testing.T, doc *bench.Document) []byte {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, JSON(&b, doc))
	return b.Bytes()
}

func TestGoldenForms(t *testing.T) {
	docs := documents()
	for _, name := range names(docs) {
		golden(t, name+".md", []byte(markdown(t, docs[name])))
		golden(t, name+".tex", []byte(latex(t, docs[name])))
	}
	for _, name := range []string{"single-stream", "hostile-names"} {
		var rows, joint, chance bytes.Buffer
		require.NoError(t, CSV(&rows, docs[name]))
		require.NoError(t, JointCSV(&joint, docs[name]))
		require.NoError(t, ChanceCSV(&chance, docs[name]))
		golden(t, name+".csv", rows.Bytes())
		golden(t, name+"-joint.csv", joint.Bytes())
		golden(t, name+"-chance.csv", chance.Bytes())
	}
	for _, name := range []string{"single-stream", "empty"} {
		golden(t, name+".json", jsonOf(t, docs[name]))
	}
}

// Every table of the Markdown form has as many cells in each row as in its head.
func TestMarkdownTablesAreRectangular(t *testing.T) {
	docs := documents()
	bar := regexp.MustCompile(`(^|[^\\])\|`)
	for _, name := range names(docs) {
		want := 0
		for _, l := range strings.Split(markdown(t, docs[name]), "\n") {
			if !strings.HasPrefix(l, "|") {
				want = 0
				continue
			}
			n := len(bar.FindAllString(l, -1))
			if want == 0 {
				want = n
			}
			assert.Equal(t, want, n, "%s: %s", name, l)
		}
	}
}

func TestMarkdownEscapes(t *testing.T) {
	assert.Equal(t, `a\|b\*c\_d\[e\]\(f`, strings.ReplaceAll(markdownText("a|b*c_d[e](f"), "(", `\(`))
	assert.Equal(t, `\<script\>\&\$\~`, markdownText("<script>&$~"))
	assert.Equal(t, `\- x`, markdownText("- x"))
	assert.Equal(t, `1\. x`, markdownText("1. x"))
	assert.Equal(t, "-0.3", markdownText("-0.3"))
	assert.Equal(t, `https\://x www\.y`, markdownText("https://x www.y"))
}

// A LaTeX table compiles only if its environments and braces match, each row has
// as many cells as there are columns, and no special character stands alone.
func TestLaTeXIsWellFormed(t *testing.T) {
	docs := documents()
	environment := regexp.MustCompile(`\\(begin|end)\{([a-z]+)\}(?:\{([lr]+)\})?`)
	escaped := regexp.MustCompile(`\\[{}$&#%_\\]`)
	separator := regexp.MustCompile(`(^|[^\\])&`)
	for _, name := range names(docs) {
		var open []string
		columns := 0
		for i, l := range strings.Split(latex(t, docs[name]), "\n") {
			if strings.HasPrefix(l, "% ") {
				require.Zero(t, i, "only the first line is a comment")
				continue
			}
			for _, m := range environment.FindAllStringSubmatch(l, -1) {
				if m[1] == "begin" {
					open = append(open, m[2])
				} else {
					require.NotEmpty(t, open)
					assert.Equal(t, open[len(open)-1], m[2])
					open = open[:len(open)-1]
				}
				if m[3] != "" {
					columns = len(m[3])
				}
			}
			if strings.HasSuffix(l, `\\`) {
				assert.Equal(t, columns, 1+len(separator.FindAllString(l, -1)), "%s: %s", name, l)
			}
			bare := escaped.ReplaceAllString(l, "")
			depth := 0
			for _, r := range bare {
				switch r {
				case '{':
					depth++
				case '}':
					depth--
				}
				require.GreaterOrEqual(t, depth, 0, l)
			}
			assert.Zero(t, depth, "%s: %s", name, l)
			assert.Zero(t, strings.Count(bare, "$")%2, "%s: %s", name, l)
			assert.NotContains(t, bare, "#")
			assert.NotContains(t, bare, "%")
			assert.NotContains(t, bare, "_")
			assert.NotContains(t, bare, "^")
			assert.NotContains(t, bare, "~")
		}
		assert.Empty(t, open, name)
	}
	assert.Equal(t, `$\alpha$\_1 \& 5\,\%`, strings.Replace(latexText("α_1 & 5 %"), `5 \`, `5\,\`, 1))
	assert.Equal(t, `{[}2pt{]}{*}`, latexText("[2pt]*"), "not taken as the argument of the line break before it")
	assert.Equal(t, `\textbackslash{}input\{x\}`, latexText(`\input{x}`))
}

// keys are the keys of x's JSON form in order.
func keys(t *testing.T, x any) []string {
	t.Helper()
	text, err := json.Marshal(x)
	require.NoError(t, err)
	d := json.NewDecoder(bytes.NewReader(text))
	var out []string
	depth, key := 0, true
	for d.More() || depth > 0 {
		token, err := d.Token()
		require.NoError(t, err)
		switch token {
		case json.Delim('{'), json.Delim('['):
			depth++
			key = depth == 1
		case json.Delim('}'), json.Delim(']'):
			depth--
			key = depth == 1
		default:
			if depth == 1 {
				if key {
					out = append(out, token.(string))
				}
				key = !key
			}
		}
	}
	return out
}

func readCSV(t *testing.T, render func(*bytes.Buffer) error) [][]string {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, render(&b))
	out, err := csv.NewReader(&b).ReadAll()
	require.NoError(t, err)
	return out
}

func TestCSVHasTheKeysAndValuesOfTheJSON(t *testing.T) {
	doc := documents()["demo"]
	rows := readCSV(t, func(b *bytes.Buffer) error { return CSV(b, doc) })
	assert.Equal(t, keys(t, doc.Rows[0]), rows[0])
	require.Len(t, rows, 1+len(doc.Rows))
	at := map[string]int{}
	for i, k := range rows[0] {
		at[k] = i
	}
	for i, r := range doc.Rows {
		line := rows[i+1]
		assert.Equal(t, strings.Join(r.Given, "+"), line[at["given"]])
		assert.Equal(t, strconv.Itoa(r.Cells), line[at["cells"]])
		got, err := strconv.ParseFloat(line[at["bits_per_s"]], 64)
		require.NoError(t, err)
		assert.Equal(t, float64(r.BitsPerS), got, "every bit of a number is kept")
		assert.Equal(t, r.BitsPerSpike.Known(), line[at["bits_per_spike"]] != "", "null is an empty cell")
		assert.Equal(t, r.Rank != nil, line[at["rank"]] != "")
	}
	joint := readCSV(t, func(b *bytes.Buffer) error { return JointCSV(b, doc) })
	assert.Equal(t, keys(t, doc.Joint[0]), joint[0])
	assert.Equal(t, "soma+dendrite", joint[1][0])
	require.Len(t, joint, 1+len(doc.Joint))
	require.Len(t, readCSV(t, func(b *bytes.Buffer) error { return ChanceCSV(b, doc) }), 1+len(doc.Chance))
	empty := readCSV(t, func(b *bytes.Buffer) error { return CSV(b, documents()["empty"]) })
	assert.Equal(t, [][]string{rows[0]}, empty, "a header even without rows")
}

func TestCSVRunsNoFormula(t *testing.T) {
	doc := documents()["hostile-names"]
	for _, line := range readCSV(t, func(b *bytes.Buffer) error { return CSV(b, doc) })[1:] {
		for _, field := range line {
			if field == "" || !strings.ContainsRune("=+-@\t\r", rune(field[0])) {
				continue
			}
			_, err := strconv.ParseFloat(field, 64)
			assert.NoError(t, err, "only a number may begin as a formula does: %q", field)
		}
	}
	assert.Equal(t, "'=1", harmless("=1"))
	assert.Equal(t, "soma", harmless("soma"))
	assert.Equal(t, "", harmless(""))
}

func TestJSONRoundTrip(t *testing.T) {
	docs := documents()
	for _, name := range names(docs) {
		first := jsonOf(t, docs[name])
		var back bench.Document
		d := json.NewDecoder(bytes.NewReader(first))
		d.DisallowUnknownFields()
		require.NoError(t, d.Decode(&back), name)
		assert.Equal(t, string(first), string(jsonOf(t, &back)), name)
		assert.NotContains(t, string(first), "NaN")
		assert.NotContains(t, string(first), "Inf")
		assert.Equal(t, textOf(t, docs[name], TextOptions{}), textOf(t, &back, TextOptions{}), "%s: a stored result gives the same report", name)
	}
	for _, key := range []string{`"rows": []`, `"joint": []`, `"chance": []`, `"spectra": []`, `"warnings": []`} {
		assert.Contains(t, string(jsonOf(t, docs["empty"])), key)
	}
}

func TestJSONRefusesWhatIsNoNumber(t *testing.T) {
	for _, x := range []float64{math.NaN(), math.Inf(1)} {
		doc := documents()["single-stream"]
		doc.Settings.Bursts.MaxISIMS = x
		var b bytes.Buffer
		assert.ErrorContains(t, JSON(&b, doc), "no JSON form")
		assert.Zero(t, b.Len(), "nothing is written")
	}
}

// Rendering reads a document and changes nothing in it.
func TestDocumentsAreNotChanged(t *testing.T) {
	docs, same := documents(), documents()
	for _, name := range names(docs) {
		before := jsonOf(t, same[name])
		textOf(t, docs[name], TextOptions{Verbose: true})
		markdown(t, docs[name])
		latex(t, docs[name])
		newView(docs[name]).figures()
		assert.Equal(t, string(before), string(jsonOf(t, docs[name])), name)
	}
}
