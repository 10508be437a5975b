package report

import (
	"bytes"
	"encoding/binary"
	"encoding/xml"
	"fmt"
	"hash/crc32"
	"image/color"
	"os"
	"path/filepath"
	"strings"

	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// save writes every figure as SVG and PNG.
func save(dir string, figures []figure) ([]string, error) {
	if len(figures) == 0 {
		return nil, nil
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return nil, fmt.Errorf("figures: %w", err)
	}
	var out []string
	for i := range figures {
		f := &figures[i]
		for _, form := range []struct {
			ending string
			render func(*figure) ([]byte, error)
		}{{".svg", svg}, {".png", png}} {
			content, err := form.render(f)
			if err != nil {
				return out, fmt.Errorf("figure %s%s: %w", f.name, form.ending, err)
			}
			path := filepath.Join(dir, f.name+form.ending)
			if err := appear(path, content); err != nil {
				return out, fmt.Errorf("figures: %w", err)
			}
			out = append(out, path)
		}
	}
	return out, nil
}

// appear writes a file under another name and renames it.
func appear(path string, content []byte) error {
	part := fmt.Sprintf("%s.%d.part", path, os.Getpid())
	if err := os.WriteFile(part, content, 0o666); err != nil {
		return err
	}
	if err := os.Rename(part, path); err != nil {
		os.Remove(part)
		return err
	}
	return nil
}

const edge = vg.Length(3) // around a figure

// layout is the legend of a figure and the size of the whole.
func (f *figure) layout() (keyed, vg.Length) {
	k := layLegend(f.legend, figureWidth-2*edge-6)
	return k, plotHeight + k.height() + 2*edge
}

// render draws the figure onto a canvas of its layout's size.
func (f *figure) render(c draw.Canvas, k keyed) {
	c.SetColor(paper)
	c.Fill(c.Rectangle.Path())
	inner := draw.Crop(c, edge, -edge-3, edge, -edge)
	k.draw(draw.Crop(inner, 3, 0, 0, 0))
	p := f.build()
	below := lettering(labelSize)
	below.XAlign, below.YAlign = draw.XCenter, draw.YBottom
	room := draw.Crop(inner, 0, 0, below.FontExtents().Height-1, -k.height()-4)
	p.Draw(room)
	data := p.DataCanvas(room)
	c.FillText(below, vg.Point{X: data.Center().X, Y: inner.Min.Y}, f.x.fitted(plotWidth))
}

// drawnText is a raster canvas on which a character that the font lacks leaves a
// question mark rather than nothing. (Programs that show SVG have other fonts.)
type drawnText struct{ *vgimg.Canvas }

// FillString implements vg.Canvas.
func (c drawnText) FillString(f font.Face, at vg.Point, s string) {
	var buf sfnt.Buffer
	c.Canvas.FillString(f, at, strings.Map(func(r rune) rune {
		if i, err := f.Face.GlyphIndex(&buf, r); err != nil || i == 0 {
			return '?'
		}
		return r
	}, s))
}

// svgFont is what the SVG canvas writes for the theme's font. Arial has the same
// widths, for programs that ignore embedded fonts.
const (
	svgFont      = `style="font-family:Liberation Sans;`
	svgFallbacks = `style="font-family:'Liberation Sans',Arial,Helvetica,sans-serif;`
)

func svg(f *figure) ([]byte, error) {
	k, height := f.layout()
	c := vgsvg.NewWith(vgsvg.UseWH(figureWidth, height), vgsvg.EmbedFonts(true))
	f.render(draw.New(c), k)
	var out bytes.Buffer
	if _, err := c.WriteTo(&out); err != nil {
		return nil, err
	}
	var about bytes.Buffer
	about.WriteString("<title>")
	if err := xml.EscapeText(&about, []byte(f.about)); err != nil {
		return nil, err
	}
	about.WriteString("</title>\n<defs>")
	text := bytes.ReplaceAll(out.Bytes(), []byte(svgFont), []byte(svgFallbacks))
	return bytes.Replace(text, []byte("<defs>"), about.Bytes(), 1), nil
}

func png(f *figure) ([]byte, error) {
	k, height := f.layout()
	c := vgimg.NewWith(vgimg.UseWH(figureWidth, height), vgimg.UseDPI(figureDPI), vgimg.UseBackgroundColor(paper))
	f.render(draw.New(drawnText{c}), k)
	var out bytes.Buffer
	if _, err := (vgimg.PngCanvas{Canvas: c}).WriteTo(&out); err != nil {
		return nil, err
	}
	return withDensity(out.Bytes()), nil
}

// withDensity adds the physical pixel size to a PNG (the chunk pHYs, after the
// 33 bytes of signature and header), so that it is placed at its true width.
func withDensity(png []byte) []byte {
	const perMetre = figureDPI * 10000 / 254
	chunk := binary.BigEndian.AppendUint32(nil, 9)
	chunk = append(chunk, "pHYs"...)
	chunk = binary.BigEndian.AppendUint32(chunk, perMetre)
	chunk = binary.BigEndian.AppendUint32(chunk, perMetre)
	chunk = append(chunk, 1) // metres
	chunk = binary.BigEndian.AppendUint32(chunk, crc32.ChecksumIEEE(chunk[4:]))
	out := append([]byte(nil), png[:33]...)
	return append(append(out, chunk...), png[33:]...)
}

func withAlpha(c color.NRGBA, alpha uint8) color.NRGBA {
	c.A = alpha
	return c
}
