package render

import (
	"fmt"
	"strings"
)

// Preset is a named style: a width with the sizes of type and the strokes that
// suit it. What publishers ask for differs from journal to journal and from year
// to year: the presets keep the rules in their descriptions, nothing more.
type Preset struct {
	Name  string
	About string
	width float64 // mm
	adapt func(*Style)
}

// DefaultPreset is the name of the preset for an empty name.
const DefaultPreset = "double-174"

// presets in the order in which they are listed. Widths and rules: Springer's and
// Elsevier's pages for authors give 84 and 174, 90, 140 and 190 mm, subscripts of
// at least 6 pt and lines of at least 0.1 mm (0.28 pt); the Geological Society of
// America's give 89 and 185 mm and lines from 1 pt; Nature's give 89 and 183 mm
// and text of 5 to 7 pt. The size of a projected slide is common practice.
var presets = []Preset{
	{"single-84", "one column of 84 mm, 8 pt text, lines from 0.3 pt", 84, nil},
	{"single-90", "one column of 90 mm, 8 pt text, lines from 0.3 pt", 90, nil},
	{"middle-140", "one and a half columns, 140 mm, 8 pt text, lines from 0.3 pt", 140, nil},
	{"double-174", "two columns of 174 mm together, 8 pt text, lines from 0.3 pt", 174, nil},
	{"double-190", "two columns of 190 mm together, 8 pt text, lines from 0.3 pt", 190, nil},
	{"heavy-89", "one column of 89 mm, 8 pt text, no line under 1 pt", 89, (*Style).heavy},
	{"heavy-185", "two columns of 185 mm together, 8 pt text, no line under 1 pt", 185, (*Style).heavy},
	{"small-89", "one column of 89 mm, 7 pt text, nothing under 5 pt", 89, (*Style).small},
	{"small-183", "two columns of 183 mm together, 7 pt text, nothing under 5 pt", 183, (*Style).small},
	{"slides", "310 mm wide for projection, 16 pt text, lines from 1 pt", 310, (*Style).slides},
}

// Presets lists the presets.
func Presets() []Preset { return append([]Preset(nil), presets...) }

// StyleNamed returns the preset of that name in colour; an empty name is
// DefaultPreset.
func StyleNamed(name string) (Style, error) {
	if name == "" {
		name = DefaultPreset
	}
	var names []string
	for _, p := range presets {
		if p.Name == name {
			s := ColourStyle()
			s.Name, s.Width = p.Name, p.width
			if p.adapt != nil {
				p.adapt(&s)
			}
			return s, nil
		}
		names = append(names, p.Name)
	}
	return Style{}, &FigureError{What: fmt.Sprintf("style %q is unknown", name), Where: "figure style",
		Remedy: "use one of " + strings.Join(names, ", ")}
}

// heavy draws nothing finer than 1 pt.
func (s *Style) heavy() {
	s.MinLine = 1
	s.Frame, s.Tick, s.Boundary, s.Polymorph = 1.2, 1, 1.9, 1.2
	s.Isotherm, s.IsothermHeavy = 1, 1.4
	s.Path, s.SolidPath, s.Mark, s.Rule, s.Lead = 2, 1.4, 1.1, 1, 1
}

// small sets 7 pt type with subscripts of 5.25 pt.
func (s *Style) small() { s.Base, s.Apex, s.MinText = 7, 8, 5 }

// slides is a figure with stronger lines, enlarged: to be read from the back of a
// room it needs large type with few words, and so the proportions of a narrow
// figure.
func (s *Style) slides() {
	s.Zoom = 2
	s.MinLine = 0.5
	s.Frame, s.Tick, s.Boundary, s.Polymorph = 1, 0.6, 1.4, 0.9
	s.Isotherm, s.IsothermHeavy = 0.5, 0.85
	s.Path, s.SolidPath, s.Mark, s.Rule, s.Lead = 1.7, 1.1, 0.9, 0.5, 0.5
}

// zoom is how many times everything is enlarged.
func (s Style) zoom() float64 {
	if s.Zoom == 0 {
		return 1
	}
	return s.Zoom
}

// Widths are the narrowest and widest figure of a style, mm.
func Widths(s Style) (least, most float64) {
	return minWidth * s.zoom(), max(maxWidth, minWidth*s.zoom())
}

// enlarged returns the scene k times as large, type and strokes included.
func (s *Scene) enlarged(k float64) *Scene {
	if k == 1 {
		return s
	}
	out := *s
	out.Width, out.Height = k*s.Width, k*s.Height
	out.Layers = nil
	for _, l := range s.Layers {
		to := out.Layer(l.Name)
		for _, it := range l.Items {
			switch v := it.(type) {
			case *PathItem:
				to.Path(v.enlarged(k))
			case *TextItem:
				to.Text(v.enlarged(k))
			}
		}
	}
	return &out
}

func (p PathItem) enlarged(k float64) PathItem {
	p.Path = p.Path.Transform(func(q Point) Point { return q.times(k) })
	if p.Stroke != nil {
		st := *p.Stroke
		st.Width *= k
		st.Dash = append([]float64(nil), st.Dash...)
		for i := range st.Dash {
			st.Dash[i] *= k
		}
		p.Stroke = &st
	}
	return p
}

func (t TextItem) enlarged(k float64) TextItem {
	t.X, t.Y = k*t.X, k*t.Y
	t.Runs = append([]Run(nil), t.Runs...)
	for i := range t.Runs {
		t.Runs[i].Size *= k
		t.Runs[i].Rise *= k
	}
	return t
}
