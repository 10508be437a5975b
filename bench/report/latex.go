package report

import (
	"bytes"
	"fmt"
	"io"
	"regexp"
	"strings"

	"codeassay/bench"
)

// latexSizes is how many ensemble sizes a text block is wide enough for.
const latexSizes = 8

// LaTeX writes the tables of doc as floats with captions, ready for \input. They
// need the package booktabs. Names in other scripts than Latin and Greek need an
// engine that knows Unicode. The error is that of w.
func LaTeX(w io.Writer, doc *bench.Document) error {
	var out bytes.Buffer
	out.WriteString("% Made by codeassay. In the preamble: \\usepackage{booktabs}\n")
	for _, b := range layOut(doc, false) {
		if t, ok := b.(table); ok {
			latexTable(&out, t)
		}
	}
	_, err := w.Write(out.Bytes())
	return err
}

func latexTable(out *bytes.Buffer, t table) {
	caption := latexText(t.caption) + "."
	t = t.keep(func(i int) bool { return t.columns[i].expendable < spare })
	t, kept, of := thinTo(t, latexSizes)
	if kept < of {
		caption += fmt.Sprintf(" %d of %d sizes.", kept, of)
	}
	flush := make([]string, len(t.columns))
	head := make([]string, len(t.columns))
	marks := false
	var rows bytes.Buffer
	for i, c := range t.columns {
		flush[i] = "l"
		if c.number {
			flush[i] = "r"
		}
		head[i] = latexText(c.name())
	}
	for _, row := range t.rows {
		line := make([]string, len(row))
		for i, c := range row {
			line[i] = latexText(c.text)
			if t.columns[i].number {
				line[i] = minus.ReplaceAllString(line[i], "$$-$$$1")
			}
			marks = marks || strings.HasSuffix(c.text, undetected)
		}
		fmt.Fprintf(&rows, "%s \\\\\n", strings.Join(line, " & "))
	}
	if marks {
		caption += " " + latexText(undetected) + " not detected."
	}
	fmt.Fprintf(out, "\n\\begin{table}[htbp]\n\\centering\\small\n\\caption{%s}\n\\begin{tabular}{%s}\n\\toprule\n%s \\\\\n\\midrule\n%s\\bottomrule\n\\end{tabular}\n\\end{table}\n",
		caption, strings.Join(flush, ""), strings.Join(head, " & "), rows.String())
}

var minus = regexp.MustCompile(`-([0-9])`)

// latexText escapes what TeX would take for its own, and writes Greek and the
// signs that this package uses so that any engine sets them.
func latexText(s string) string {
	var out strings.Builder
	for _, r := range s {
		if to, ok := latexSigns[r]; ok {
			out.WriteString(to)
		} else {
			out.WriteRune(r)
		}
	}
	return out.String()
}

var latexSigns = map[rune]string{
	'\\': `\textbackslash{}`, '{': `\{`, '}': `\}`, '$': `\$`, '&': `\&`, '#': `\#`, '%': `\%`, '_': `\_`,
	'^': `\textasciicircum{}`, '~': `\textasciitilde{}`, '<': `\textless{}`, '>': `\textgreater{}`, '|': `\textbar{}`,
	'"': `''`, '`': `\textasciigrave{}`, '[': `{[}`, ']': `{]}`, '*': `{*}`, // a row may not begin with [ or *
	'–': `--`, '—': `---`, '−': `$-$`, '×': `$\times$`, '÷': `$\div$`, '±': `$\pm$`, '≥': `$\geq$`, '≤': `$\leq$`, '≈': `$\approx$`,
	'†': `\textdagger{}`, '°': `\textdegree{}`, '²': `\textsuperscript{2}`, '³': `\textsuperscript{3}`, '…': `\dots{}`, '\uFFFD': `?`,
	'α': `$\alpha$`, 'β': `$\beta$`, 'γ': `$\gamma$`, 'δ': `$\delta$`, 'ε': `$\varepsilon$`, 'ζ': `$\zeta$`, 'η': `$\eta$`, 'θ': `$\theta$`,
	'ι': `$\iota$`, 'κ': `$\kappa$`, 'λ': `$\lambda$`, 'μ': `$\mu$`, 'µ': `$\mu$`, 'ν': `$\nu$`, 'ξ': `$\xi$`, 'ο': `o`, 'π': `$\pi$`,
	'ρ': `$\rho$`, 'σ': `$\sigma$`, 'ς': `$\varsigma$`, 'τ': `$\tau$`, 'υ': `$\upsilon$`, 'φ': `$\varphi$`, 'χ': `$\chi$`, 'ψ': `$\psi$`, 'ω': `$\omega$`,
	'Γ': `$\Gamma$`, 'Δ': `$\Delta$`, 'Θ': `$\Theta$`, 'Λ': `$\Lambda$`, 'Ξ': `$\Xi$`, 'Π': `$\Pi$`, 'Σ': `$\Sigma$`, 'Φ': `$\Phi$`, 'Ψ': `$\Psi$`, 'Ω': `$\Omega$`,
}
