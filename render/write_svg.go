package render

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"io"
	"strings"
)

// Decimals of SVG coordinates in mm: 0.1 micrometre.
const svgPrecision = 4

// fontFallback follows the embedded family for programs that cannot load it;
// all have its metrics.
const fontFallback = "'" + fontFamily + "', Arial, Helvetica, sans-serif"

// writeSVG writes the scene as an SVG in millimetres with one group per
// layer, and text either as text with embedded fonts or as shapes.
func writeSVG(w io.Writer, s *Scene, subs []*subset, m metadata, o Options) error {
	v := &svgWriter{height: s.Height, outline: o.OutlineText}
	v.head(s, m)
	if !o.OutlineText {
		v.fonts(subs)
	}
	ids := map[string]bool{"figure-title": true, "figure-desc": true}
	for _, l := range s.Layers {
		v.printf("<g id=\"%s\">\n", layerID(l.Name, ids))
		for _, it := range l.Items {
			switch it := it.(type) {
			case *PathItem:
				v.path(it)
			case *TextItem:
				v.text(it)
			}
		}
		v.printf("</g>\n")
	}
	v.printf("</svg>\n")
	v.b.Write(svgSeal(v.b.Bytes()))
	_, err := w.Write(v.b.Bytes())
	return err
}

type svgWriter struct {
	b       bytes.Buffer
	height  float64 // page height, to turn the y axis
	outline bool
}

func (v *svgWriter) printf(format string, a ...any) { fmt.Fprintf(&v.b, format, a...) }

func (v *svgWriter) head(s *Scene, m metadata) {
	title := m.title
	if title == "" {
		title = "Figure"
	}
	w, h := svgNumber(s.Width), svgNumber(s.Height)
	v.printf("<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n"+
		"<svg xmlns=\"http://www.w3.org/2000/svg\" version=\"1.1\" width=\"%smm\" height=\"%smm\" viewBox=\"0 0 %s %s\""+
		" role=\"img\" aria-labelledby=\"figure-title figure-desc\" xml:lang=\"en\" xml:space=\"preserve\""+
		" font-family=\"%s\" stroke-miterlimit=\"4\">\n", w, h, w, h, fontFallback)
	v.printf("<title id=\"figure-title\">%s</title>\n<desc id=\"figure-desc\">%s</desc>\n<metadata>%s</metadata>\n",
		escape(title), escape(m.alternative()), m.rdf())
}

// fonts embeds the subsets as style rules.
func (v *svgWriter) fonts(subs []*subset) {
	if len(subs) == 0 {
		return
	}
	v.printf("<style>\ntext{white-space:pre}\n")
	for _, s := range subs {
		slant := "normal"
		if s.face.font == Italic {
			slant = "italic"
		}
		v.printf("@font-face{font-family:'%s';font-style:%s;font-weight:%d;src:url(data:font/ttf;base64,%s) format('truetype')}\n",
			fontFamily, slant, s.face.weight, base64.StdEncoding.EncodeToString(s.truetype(true)))
	}
	v.printf("</style>\n")
}

func (v *svgWriter) path(p *PathItem) {
	stroke := p.Stroke.painted()
	if p.Path.Empty() || p.Fill == nil && !stroke {
		return
	}
	fill := "none"
	if p.Fill != nil {
		fill = p.Fill.String()
	}
	v.printf("<path fill=\"%s\"", fill)
	if stroke {
		v.printf(" stroke=\"%s\" stroke-width=\"%s\"", p.Stroke.Colour, svgNumber(p.Stroke.Width))
		if p.Stroke.Round {
			v.printf(" stroke-linecap=\"round\" stroke-linejoin=\"round\"")
		}
		if d := p.Stroke.dashes(); d != nil {
			parts := make([]string, len(d))
			for i, x := range d {
				parts[i] = svgNumber(x)
			}
			v.printf(" stroke-dasharray=\"%s\"", strings.Join(parts, " "))
		}
	}
	v.data(p.Path)
	v.printf("/>\n")
}

// data writes the d attribute of a path.
func (v *svgWriter) data(p Path) {
	b := []byte(" d=\"")
	p.each(func(op pathOp, _ Point, pts []Point) {
		b = append(b, "MLCZ"[op])
		for i, q := range pts {
			if i > 0 {
				b = append(b, ' ')
			}
			b = append(appendNumber(b, q.X, svgPrecision), ' ')
			b = appendNumber(b, v.height-q.Y, svgPrecision)
		}
	})
	v.b.Write(append(b, '"'))
}

// text writes a label: one run as a plain text element, several as spans
// that follow each other, so that a wider substitute font cannot make them
// overlap. The stated length of each run makes them meet where measured.
func (v *svgWriter) text(t *TextItem) {
	if v.outline {
		if p := t.Outline(); !p.Empty() {
			v.printf("<path fill=\"%s\" aria-label=\"%s\"", t.Colour, escape(clean(t.label())))
			v.data(p)
			v.printf("/>\n")
		}
		return
	}
	v.printf("<text fill=\"%s\"", t.Colour)
	x, y := svgNumber(t.X), svgNumber(v.height-t.Y)
	if t.Angle != 0 {
		v.printf(" transform=\"translate(%s %s) rotate(%s)\"", x, y, svgNumber(-t.Angle))
	} else {
		v.printf(" x=\"%s\" y=\"%s\"", x, y)
	}
	if len(t.Runs) == 1 && t.Runs[0].Rise == 0 {
		v.run(t.Runs[0], 0)
		v.printf("</text>\n")
		return
	}
	v.printf(">")
	rise := 0.0
	for _, r := range t.Runs {
		if r.Text != "" {
			v.printf("<tspan")
			v.run(r, r.Rise-rise)
			v.printf("</tspan>")
			rise = r.Rise
		}
	}
	v.printf("</text>\n")
}

// run writes the attributes and text of a run inside an open tag; lift moves
// the baseline up from that of the run before.
func (v *svgWriter) run(r Run, lift float64) {
	if lift != 0 {
		v.printf(" dy=\"%s\"", svgNumber(-lift))
	}
	v.printf(" font-size=\"%s\"", svgNumber(r.Size*mmPerPoint))
	switch r.Font {
	case Italic:
		v.printf(" font-style=\"italic\"")
	case Bold:
		v.printf(" font-weight=\"bold\"")
	}
	v.printf(" textLength=\"%s\" lengthAdjust=\"spacingAndGlyphs\">%s",
		svgNumber(TextWidth([]Run{r})), escape(r.Text))
}

func svgNumber(v float64) string { return string(appendNumber(nil, v, svgPrecision)) }

// layerID returns a valid XML identifier for a layer, distinct from those
// taken, and takes it.
func layerID(name string, taken map[string]bool) string {
	id := strings.Map(func(r rune) rune {
		if 'a' <= r && r <= 'z' || 'A' <= r && r <= 'Z' || isDigit(r) || r == '-' || r == '_' {
			return r
		}
		return '-'
	}, name)
	if id == "" || isDigit(rune(id[0])) || id[0] == '-' {
		id = "layer-" + id
	}
	unique := id
	for i := 2; taken[unique]; i++ {
		unique = fmt.Sprintf("%s-%d", id, i)
	}
	taken[unique] = true
	return unique
}
