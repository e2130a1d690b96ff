package render

import (
	"fmt"
	"math"
	"slices"
)

// Decimals of page coordinates in points: 0.001 pt is 0.35 micrometre.
const pdfPrecision = 3

// contentWriter builds a page's drawing operators, repeating a colour, line
// width or dash only when it changes.
type contentWriter struct {
	b      []byte
	subs   [fontCount]*subset
	name   [fontCount]int // number in the page's font resources
	fill   Colour
	line   Colour
	width  float64
	dash   []float64
	round  bool
	marks  int  // marked stretches begun, numbered from 0
	shapes bool // the open stretch takes shapes
}

// pdfContent returns the drawing operators of the whole page. All of it is
// marked as content of the page's one figure: each label is a stretch of its
// own, and so are the shapes between labels. The second result counts them.
func pdfContent(s *Scene, subs []*subset) ([]byte, int) {
	c := &contentWriter{width: 1}
	for i, sub := range subs {
		c.subs[sub.face.font] = sub
		c.name[sub.face.font] = i
	}
	c.op("M", 0, 4)
	for _, l := range s.Layers {
		for _, it := range l.Items {
			switch it := it.(type) {
			case *PathItem:
				c.path(it)
			case *TextItem:
				c.text(it)
			}
		}
	}
	c.endMark()
	return c.b, c.marks
}

// mark begins the next marked stretch; actual, when not empty, is what its
// letters read together (readers look for it under the tag Span only).
func (c *contentWriter) mark(tag, actual string) {
	c.endMark()
	c.b = fmt.Appendf(c.b, "/%s << /MCID %d", tag, c.marks)
	if actual != "" {
		c.b = append(c.b, " /ActualText "+pdfText(actual)...)
	}
	c.b = append(c.b, " >> BDC\n"...)
	c.marks++
}

func (c *contentWriter) endMark() {
	if c.marks > 0 {
		c.op("EMC", 0)
	}
	c.shapes = false
}

// op appends numbers and an operator.
func (c *contentWriter) op(name string, prec int, v ...float64) {
	for _, x := range v {
		c.b = append(appendNumber(c.b, x, prec), ' ')
	}
	c.b = append(append(c.b, name...), '\n')
}

func (c *contentWriter) pointOp(name string, pts ...Point) {
	for _, p := range pts {
		c.b = append(appendNumber(c.b, p.X*pointPerMM, pdfPrecision), ' ')
		c.b = append(appendNumber(c.b, p.Y*pointPerMM, pdfPrecision), ' ')
	}
	c.b = append(append(c.b, name...), '\n')
}

func (c *contentWriter) path(p *PathItem) {
	stroke := p.Stroke.painted()
	if p.Path.Empty() || p.Fill == nil && !stroke {
		return
	}
	if !c.shapes {
		c.mark("Figure", "")
		c.shapes = true
	}
	paint := "S"
	if p.Fill != nil {
		c.setFill(*p.Fill)
		paint = "f"
	}
	if stroke {
		c.setStroke(p.Stroke)
		if p.Fill != nil {
			paint = "B"
		}
	}
	p.Path.each(func(op pathOp, _ Point, pts []Point) {
		switch op {
		case opMove:
			c.pointOp("m", pts...)
		case opLine:
			c.pointOp("l", pts...)
		case opCube:
			c.pointOp("c", pts...)
		case opClose:
			c.op("h", 0)
		}
	})
	c.op(paint, 0)
}

func (c *contentWriter) setFill(col Colour) {
	if col != c.fill {
		c.fill = col
		c.op("rg", 4, float64(col.R)/255, float64(col.G)/255, float64(col.B)/255)
	}
}

func (c *contentWriter) setStroke(s *Stroke) {
	if col := s.Colour; col != c.line {
		c.line = col
		c.op("RG", 4, float64(col.R)/255, float64(col.G)/255, float64(col.B)/255)
	}
	if w := s.Width * pointPerMM; w != c.width {
		c.width = w
		c.op("w", pdfPrecision+1, w)
	}
	if s.Round != c.round {
		c.round = s.Round
		style := 0.0
		if s.Round {
			style = 1
		}
		c.op("J", 0, style)
		c.op("j", 0, style)
	}
	if d := s.dashes(); !slices.Equal(d, c.dash) {
		c.dash = d
		c.b = append(c.b, '[')
		for _, v := range d {
			c.b = append(appendNumber(c.b, v*pointPerMM, pdfPrecision), ' ')
		}
		c.b = append(c.b, "] 0 d\n"...)
	}
}

// text sets the runs of one label as one text object: the viewer advances
// from run to run by the same widths that were measured.
func (c *contentWriter) text(t *TextItem) {
	if len(t.Runs) == 0 {
		return
	}
	c.setFill(t.Colour)
	// Text at a slant is taken apart letter by letter by programs that read
	// words line by line, so it also says what it reads as a whole.
	actual := ""
	if math.Mod(t.Angle, 90) != 0 {
		actual = t.plain()
	}
	c.mark("Span", actual)
	sin, cos := math.Sincos(t.Angle * math.Pi / 180)
	c.op("BT", 0)
	for _, v := range []float64{cos, sin, -sin, cos} {
		c.b = append(appendNumber(c.b, v, 6), ' ')
	}
	c.pointOp("Tm", Point{t.X, t.Y})
	rise := 0.0
	for _, r := range t.Runs {
		if r.Text == "" {
			continue
		}
		f := clampFont(r.Font)
		c.b = fmt.Appendf(c.b, "/F%d ", c.name[f])
		c.op("Tf", 4, r.Size)
		if r.Rise != rise {
			rise = r.Rise
			c.op("Ts", pdfPrecision, rise*pointPerMM)
		}
		c.show(c.subs[f], r.Text)
	}
	if rise != 0 {
		c.op("Ts", 0, 0)
	}
	c.op("ET", 0)
}

// show writes one run with its kerning, which PDF counts in thousandths of
// an em to the left.
func (c *contentWriter) show(s *subset, text string) {
	c.b = append(c.b, "[<"...)
	for _, g := range s.face.shape(text) {
		c.b = fmt.Appendf(c.b, "%04X", s.index[g.r])
		if g.kern != 0 {
			c.b = append(c.b, "> "...)
			c.b = appendNumber(c.b, -float64(g.kern)*1000/s.face.upem, 3)
			c.b = append(c.b, " <"...)
		}
	}
	c.b = append(c.b, ">] TJ\n"...)
}
