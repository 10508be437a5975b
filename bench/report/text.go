package report

import (
	"bytes"
	"io"
	"strings"

	"codeassay/bench"
)

// TextOptions says how text is set. The zero value is 80 columns without colour.
type TextOptions struct {
	// Width is the number of columns to fill at most: 0 stands for 80; less than
	// 40 is taken as 40, more than 120 as 120.
	Width int
	// Color adds colour by ANSI escapes. It repeats what words and marks say, and
	// without the escapes the text is the same.
	Color bool
	// Verbose ranks at every ensemble size and by every estimator, and lists the
	// settings in force.
	Verbose bool
}

func (o TextOptions) withDefaults() TextOptions {
	if o.Width == 0 {
		o.Width = 80
	}
	o.Width = min(max(o.Width, 40), 120)
	return o
}

// Text writes doc for reading in a terminal. No line is wider than the options
// allow. The error is that of w.
func Text(w io.Writer, doc *bench.Document, opt TextOptions) error {
	opt = opt.withDefaults()
	p := &typesetter{TextOptions: opt, told: map[string]bool{}}
	for _, b := range layOut(doc, opt.Verbose) {
		if err := p.block(b); err != nil {
			return err
		}
	}
	_, err := w.Write(p.out.Bytes())
	return err
}

// typesetter sets blocks one after another.
type typesetter struct {
	TextOptions
	out  bytes.Buffer
	told map[string]bool // remarks on left-out columns that were made already
	list bool            // the last block was an item
}

func (p *typesetter) block(b block) error {
	if _, isItem := b.(item); p.out.Len() > 0 && !(isItem && p.list) {
		p.out.WriteByte('\n')
	}
	p.list = false
	switch b := b.(type) {
	case heading:
		p.heading(b)
	case paragraph:
		p.lines(b.text, "", "", b.tone)
	case item:
		p.list = true
		text := b.text
		if b.lead != "" {
			text = b.lead + ": " + text
		}
		p.lines(text, "- ", "  ", b.tone)
	case table:
		return p.table(b)
	}
	return nil
}

func (p *typesetter) heading(h heading) {
	text := h.text
	switch h.level {
	case 1:
		lines := wrapped(text, p.Width)
		for _, l := range lines {
			p.line(l, strong)
		}
		p.line(strings.Repeat("═", displayWidth(lines...)), neutral)
	case 2:
		p.out.WriteByte('\n')
		lines := wrapped(text, p.Width-4)
		for i, l := range lines {
			if i == len(lines)-1 {
				l = strings.TrimRight("── "+l+" "+strings.Repeat("─", max(p.Width-displayWidth(l)-4, 0)), " ")
			}
			p.line(l, strong)
		}
	default:
		for _, l := range wrapped(text, p.Width) {
			p.line(l, strong)
		}
	}
}

// lines wraps text between a first and a hanging indent.
func (p *typesetter) lines(text, first, hanging string, t tone) {
	for i, l := range wrapped(text, p.Width-len(first)) {
		if i == 0 {
			p.line(first+l, t)
		} else {
			p.line(hanging+l, t)
		}
	}
}

func (p *typesetter) line(s string, t tone) {
	p.out.WriteString(p.paint(s, t))
	p.out.WriteByte('\n')
}

// paint colours s, if colour is wanted.
func (p *typesetter) paint(s string, t tone) string {
	if !p.Color || s == "" {
		return s
	}
	switch t {
	case strong:
		return "\x1b[1m" + s + "\x1b[0m"
	case faint:
		return "\x1b[2m" + s + "\x1b[0m"
	case alert:
		return "\x1b[33m" + s + "\x1b[0m"
	}
	return s
}
