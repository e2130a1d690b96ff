package render

import (
	"fmt"
	"strconv"
	"strings"
)

// Unit conversions between typographic points and millimetres.
const (
	mmPerPoint = 25.4 / 72
	pointPerMM = 72 / 25.4
)

// Scene is a figure as drawn: flat opaque shapes and text in named layers.
// Lengths are millimetres with the origin at the bottom left and y upwards;
// only font sizes are points. Layers are painted in slice order, items of a
// layer in slice order. A Scene is built by one goroutine; once built, any
// number of goroutines may write it.
type Scene struct {
	Width, Height float64 // page box, mm
	Title         string  // metadata only, never drawn
	Description   string  // text equivalent for readers who cannot see the figure
	Subject       string
	Keywords      string
	Provenance    string  // free text put into the metadata: what made the figure from what
	Origin        *Origin // how to make the figure again, put into the metadata; nil for none
	Layers        []*Layer
}

// NewScene returns an empty scene with a page of w by h mm.
func NewScene(w, h float64) *Scene {
	return &Scene{Width: w, Height: h}
}

// Layer returns the layer of that name, appending an empty one on top when
// the scene has none yet.
func (s *Scene) Layer(name string) *Layer {
	for _, l := range s.Layers {
		if l.Name == name {
			return l
		}
	}
	l := &Layer{Name: name}
	s.Layers = append(s.Layers, l)
	return l
}

// Layer is a named group of items painted in order.
type Layer struct {
	Name  string
	Items []Item
}

// Path appends p on top of the layer.
func (l *Layer) Path(p PathItem) { l.Items = append(l.Items, &p) }

// Text appends t on top of the layer.
func (l *Layer) Text(t TextItem) { l.Items = append(l.Items, &t) }

// Item is a *PathItem or a *TextItem.
type Item interface{ item() }

func (*PathItem) item() {}
func (*TextItem) item() {}

// Colour is an opaque sRGB colour.
type Colour struct{ R, G, B uint8 }

// Hex returns the colour written as "RRGGBB" or "#RRGGBB". It panics on
// anything else: colours are constants of the program, user input goes
// through ParseHex.
func Hex(s string) Colour {
	c, err := ParseHex(s)
	if err != nil {
		panic("render: " + err.Error())
	}
	return c
}

// ParseHex reads a colour written as "RRGGBB" or "#RRGGBB".
func ParseHex(s string) (Colour, error) {
	h := strings.TrimPrefix(s, "#")
	v, err := strconv.ParseUint(h, 16, 32)
	if err != nil || len(h) != 6 {
		return Colour{}, fmt.Errorf("colour %q is not six hexadecimal digits such as 0072B2", s)
	}
	return Colour{uint8(v >> 16), uint8(v >> 8), uint8(v)}, nil
}

// String returns the colour as "#rrggbb".
func (c Colour) String() string {
	return fmt.Sprintf("#%02x%02x%02x", c.R, c.G, c.B)
}

// Stroke says how a path is outlined. Joins are mitred with limit 4 and ends
// butt, unless Round makes both round.
type Stroke struct {
	Width  float64 // mm
	Colour Colour
	Dash   []float64 // mm on, off, on, ...; nil is solid
	Round  bool
}

// PathItem is a filled and/or stroked path; the fill (non-zero winding) goes
// below the stroke. A nil Fill or Stroke leaves that part out.
type PathItem struct {
	Path   Path
	Fill   *Colour
	Stroke *Stroke
	Role   string // what the shape stands for, e.g. "marker", "arrowhead", "isotherm"
}

// Font selects a face of the built-in sans family.
type Font int

// The faces of the built-in family.
const (
	Regular Font = iota
	Italic
	Bold
	fontCount
)

// Run is a stretch of text in one face and size.
type Run struct {
	Text string
	Font Font
	Size float64 // pt
	Rise float64 // mm, baseline shift; negative for subscripts
}

// TextItem is a line of text: runs set one after another along the baseline.
type TextItem struct {
	Runs   []Run
	X, Y   float64 // mm, start of the baseline
	Angle  float64 // degrees, anticlockwise about X, Y
	Colour Colour
	Role   string
	Label  string // the text without typography, used in messages
}
