package report

import (
	"bytes"
	"encoding/xml"
	"errors"
	"image"
	"image/color"
	_ "image/png"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"gonum.org/v1/plot"
)

func TestFiguresOfTheDemo(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out", "figures")
	files, err := Figures(dir, documents()["demo"])
	require.NoError(t, err)
	var got []string
	for _, f := range files {
		got = append(got, filepath.Base(f))
		assert.Equal(t, dir, filepath.Dir(f))
	}
	assert.Equal(t, []string{
		"coherence-soma.svg", "coherence-soma.png", "coherence-dendrite.svg", "coherence-dendrite.png",
		"bits-by-size-soma.svg", "bits-by-size-soma.png", "bits-by-size-dendrite.svg", "bits-by-size-dendrite.png",
		"bits-by-size-event-rate-with-burst-size.svg", "bits-by-size-event-rate-with-burst-size.png",
	}, got)
	on, err := os.ReadDir(dir)
	require.NoError(t, err)
	assert.Len(t, on, len(got), "no parts are left behind")
}

// figuresOf are the names of the figures of a document.
func figuresOf(name string) []string {
	var out []string
	for _, f := range newView(documents()[name]).figures() {
		out = append(out, f.name)
	}
	return out
}

func TestWhichFiguresAreDrawn(t *testing.T) {
	assert.Empty(t, figuresOf("empty"))
	assert.Empty(t, figuresOf("single-stream"), "one size, no spectra: nothing to draw")
	assert.Equal(t, []string{"coherence-position", "bits-by-size-position"}, figuresOf("nothing-detected"))
	assert.Subset(t, figuresOf("bands"), []string{"bits-by-band-soma", "bits-by-band-dendrite", "bits-by-size-soma-5-40-hz"})
	assert.Subset(t, figuresOf("input-bandwidths"), []string{"bits-by-input-bandwidth-soma", "coherence-dendrite-in-20-hz", "bits-by-size-soma-in-5-hz"})
	taken := map[string]bool{}
	for _, name := range figuresOf("hostile-names") {
		assert.Regexp(t, `^[a-z0-9-]+$`, name)
		assert.False(t, taken[name], "%s is taken", name)
		taken[name] = true
	}

	alike := documents()["demo"]
	for i := range alike.Rows {
		alike.Rows[i].Stream = map[string]string{"soma": "v m", "dendrite": "v/m"}[alike.Rows[i].Stream]
	}
	var sized []string
	for _, f := range newView(alike).figures() {
		if strings.HasPrefix(f.name, "bits-by-size-v") {
			sized = append(sized, f.name)
		}
	}
	assert.Equal(t, []string{"bits-by-size-v-m", "bits-by-size-v-m-2"}, sized, "names that differ in punctuation alone")
}

// Each figure is valid, one column wide, the same on every run, has its font and
// a title for who cannot see it, and touches no edge.
func TestFiguresAreWellMade(t *testing.T) {
	for _, name := range []string{"demo", "nothing-detected", "hostile-names", "bands"} {
		figures := newView(documents()[name]).figures()
		for i := range figures {
			f := &figures[i]
			if name == "bands" && !strings.HasPrefix(f.name, "bits-by-band") {
				continue
			}
			drawn, err := svg(f)
			require.NoError(t, err)
			shown := wellFormed(t, drawn)
			assert.Contains(t, shown, f.about, "%s/%s", name, f.name)
			assert.Contains(t, string(drawn[:400]), `<svg width="240.94pt"`)
			assert.Contains(t, string(drawn), "@font-face")
			assert.NotContains(t, string(drawn), "NaN")
			for _, e := range f.legend {
				if displayWidth(e.name) < 20 {
					assert.Contains(t, shown, e.name, "%s/%s", name, f.name)
				}
			}
			raster, err := png(f)
			require.NoError(t, err)
			picture, form, err := image.Decode(bytes.NewReader(raster))
			require.NoError(t, err)
			assert.Equal(t, "png", form)
			assert.InDelta(t, 85/25.4*300, picture.Bounds().Dx(), 1, "85 mm at 300 dots an inch")
			assert.Contains(t, string(raster[:80]), "pHYs")
			assert.True(t, emptyFrame(picture, 4), "%s/%s is cut at an edge", name, f.name)
			if i == 0 {
				again, err := svg(f)
				require.NoError(t, err)
				assert.True(t, bytes.Equal(drawn, again), "the same SVG again")
				twice, err := png(f)
				require.NoError(t, err)
				assert.True(t, bytes.Equal(raster, twice), "the same PNG again")
			}
		}
	}
}

// wellFormed parses XML to its end and returns its text.
func wellFormed(t *testing.T, doc []byte) string {
	t.Helper()
	d := xml.NewDecoder(bytes.NewReader(doc))
	var out strings.Builder
	style := false
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			return out.String()
		}
		require.NoError(t, err)
		switch token := token.(type) {
		case xml.StartElement:
			style = token.Name.Local == "style"
			assert.Contains(t, []string{"svg", "g", "path", "text", "title", "defs", "style"}, token.Name.Local)
		case xml.CharData:
			if !style {
				out.Write(token)
			}
		}
	}
}

// emptyFrame reports whether the outermost pixels are paper.
func emptyFrame(p image.Image, width int) bool {
	b := p.Bounds()
	for y := b.Min.Y; y < b.Max.Y; y++ {
		for x := b.Min.X; x < b.Max.X; x++ {
			if x >= b.Min.X+width && x < b.Max.X-width && y >= b.Min.Y+width && y < b.Max.Y-width {
				continue
			}
			if r, g, b, _ := p.At(x, y).RGBA(); r&g&b != 0xffff {
				return false
			}
		}
	}
	return true
}

func TestFiguresReportAFolderThatCannotBeMade(t *testing.T) {
	file := filepath.Join(t.TempDir(), "file")
	require.NoError(t, os.WriteFile(file, nil, 0o666))
	_, err := Figures(filepath.Join(file, "figures"), documents()["demo"])
	assert.ErrorContains(t, err, "figures: ")
}

// The inks differ to normal sight and to either red-green blindness (Machado et
// al. 2009, IEEE TVCG 15:1291–1298, severity 1): at least 12 in CIE 1976 colour
// difference, five times what is just noticeable.
func TestInksAreToldApart(t *testing.T) {
	for sight, m := range map[string][3][3]float64{
		"normal":       {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
		"protanopia":   {{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}},
		"deuteranopia": {{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}},
	} {
		for i := range inks {
			for j := range i {
				a, b := lab(inks[i], m), lab(inks[j], m)
				d := math.Sqrt((a[0]-b[0])*(a[0]-b[0]) + (a[1]-b[1])*(a[1]-b[1]) + (a[2]-b[2])*(a[2]-b[2]))
				assert.Greater(t, d, 12.0, "%s: inks %d and %d", sight, j, i)
			}
		}
	}
	for i := range inks {
		for j := range i {
			assert.NotEqual(t, seriesOf(i).dashes, seriesOf(j).dashes, "without colour, dashes tell %d from %d", i, j)
			assert.NotEqual(t, seriesOf(i).marker, seriesOf(j).marker, "and so do markers")
		}
		assert.NotEqual(t, seriesOf(i).dashes, seriesOf(i+len(inks)).dashes, "the ninth differs from the first")
	}
}

// lab is a colour as seen through a matrix on linear sRGB, in CIE L*a*b* (white D65).
func lab(c color.NRGBA, m [3][3]float64) [3]float64 {
	var rgb, seen [3]float64
	for i, v := range []uint8{c.R, c.G, c.B} {
		x := float64(v) / 255
		if x <= 0.04045 {
			rgb[i] = x / 12.92
		} else {
			rgb[i] = math.Pow((x+0.055)/1.055, 2.4)
		}
	}
	for i := range seen {
		for j := range rgb {
			seen[i] += m[i][j] * rgb[j]
		}
		seen[i] = math.Min(math.Max(seen[i], 0), 1)
	}
	toXYZ := [3][3]float64{{0.4124, 0.3576, 0.1805}, {0.2126, 0.7152, 0.0722}, {0.0193, 0.1192, 0.9505}}
	white := [3]float64{0.9505, 1, 1.089}
	var f [3]float64
	for i := range f {
		x := 0.0
		for j := range seen {
			x += toXYZ[i][j] * seen[j] / white[i]
		}
		if x > 0.008856 {
			f[i] = math.Cbrt(x)
		} else {
			f[i] = 7.787*x + 16.0/116
		}
	}
	return [3]float64{116*f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])}
}

func tickLabels(ticks []plot.Tick) (out []string) {
	for _, t := range ticks {
		out = append(out, t.Label)
	}
	return out
}

func TestTicks(t *testing.T) {
	assert.Equal(t, []string{"0", "20", "40", "60", "80"}, tickLabels(rounded{}.Ticks(0, 83)))
	assert.Equal(t, []string{"0.00", "0.25", "0.50", "0.75", "1.00"}, tickLabels(rounded{}.Ticks(0, 1.04)))
	assert.Equal(t, []string{"−0.1", "0.0", "0.1", "0.2", "0.3"}, tickLabels(rounded{}.Ticks(-0.15, 0.34)))
	assert.Equal(t, []string{"3"}, tickLabels(rounded{}.Ticks(3, 3)))

	few := logTicks([]float64{1, 2, 4, 8}, 0.9, 9, 200)
	assert.Equal(t, []string{"1", "2", "4", "8"}, tickLabels(few))
	var many []float64
	for n := 1.0; n <= 1<<20; n *= 2 {
		many = append(many, n)
	}
	crowded := tickLabels(logTicks(many, 0.9, 1.1*(1<<20), 200))
	assert.Equal(t, "1", crowded[0])
	assert.Equal(t, "1048576", crowded[len(crowded)-1])
	assert.Contains(t, crowded, "", "labels that would touch are left out")
}

func TestNamesAreShortenedOnlyWhereTheyMustBe(t *testing.T) {
	style := lettering(smallSize)
	assert.Equal(t, "soma", shortened("soma", style, 100))
	short := shortened("a-very-long-code-name", style, 40)
	assert.True(t, strings.HasSuffix(short, "…"))
	assert.LessOrEqual(t, style.Width(short), style.Width("a-very-long-code-name"))
	pair := aboutAxis("soma", "dendrite")
	assert.Equal(t, "About soma and dendrite (bits/s)", pair.fitted(plotTall))
	assert.True(t, strings.HasSuffix(aboutAxis(strings.Repeat("long ", 20)).fitted(plotTall), "… (bits/s)"), "the unit stays")
}
