package render

// Widths of figures in mm that the styles are made for: one column and two
// columns. 84 and 174 mm fit Springer's page, and fit into the column of every
// other publisher looked at.
const (
	SingleColumn = 84.0
	DoubleColumn = 174.0
)

// Style is the look of a figure. Sizes of type and widths of strokes are in pt
// at printed size. The zero Style stands for ColourStyle.
type Style struct {
	Name  string  // of the preset
	Width float64 // mm, what the preset is made for
	Zoom  float64 // everything, type and strokes included, is drawn so many times as large; 0 is 1
	Ink   bool    // black and greys alone

	// Type. Formula subscripts are set at three quarters of the size around
	// them, so MinText is 6 pt for 8 pt type.
	Base, Apex       float64
	MinText, MinLine float64 // nothing is set smaller, nothing drawn finer

	// Strokes.
	Frame, Tick, Boundary, Polymorph  float64
	Isotherm, IsothermHeavy           float64
	Path, SolidPath, Mark, Rule, Lead float64
	PathCore                          float64 // white core of a hollow path; 0 is none

	// Colours. Text on white and on every tint keeps a contrast of at least
	// 4.5:1, lines one of at least 3:1 (WCAG 2.1, success criteria 1.4.3 and
	// 1.4.11).
	Text, Muted               Colour // words; less needed words
	Line                      Colour // frame, boundary curves, symbols
	IsothermHot, IsothermCold Colour // the tone of the hottest and of the coldest isotherm
	Tints                     []Colour
	Ramp                      []Colour    // for temperatures instead of tints, hottest first; nil for none
	PathColours               []Colour    // one path after another, in turn
	PathDashes, SolidDash     [][]float64 // mm on and off; nil is unbroken
}

// ColourStyle is the house style for print and screen, which the presets adapt:
// pale fields, sepia isotherms, one saturated colour for each path.
func ColourStyle() Style {
	return Style{
		Name: DefaultPreset, Width: DoubleColumn,
		Base: 8, Apex: 9, MinText: 6, MinLine: 0.3,
		Frame: 0.8, Tick: 0.5, Boundary: 1.1, Polymorph: 0.7,
		Isotherm: 0.35, IsothermHeavy: 0.65,
		Path: 1.4, SolidPath: 0.9, Mark: 0.8, Rule: 0.4, Lead: 0.4,
		Text: Hex("1C1C1C"), Muted: Hex("4F4A45"), Line: Hex("161616"),
		IsothermHot: Hex("93806B"), IsothermCold: Hex("3A2B1E"),
		Tints: []Colour{
			Hex("F6EFDC"), Hex("E1ECF1"), Hex("E9EFDD"), Hex("F5E5DF"), Hex("EAE6F0"), Hex("DDEEE8"), Hex("F4F0D0"),
		},
		PathColours: []Colour{Hex("0063A8"), Hex("B8420F"), Hex("00755A"), Hex("94386E")},
		PathDashes:  [][]float64{nil},
		SolidDash:   [][]float64{{1.5, 0.9}},
	}
}

// InkStyle is ColourStyle in black and greys.
func InkStyle() Style { return ColourStyle().Inked() }

// Inked returns the style for print in black: no tints, greys for the isotherms,
// paths hollow and told apart by the dashes of their cores.
func (s Style) Inked() Style {
	s.Ink = true
	s.Tints, s.Ramp = nil, nil
	s.Text, s.Muted, s.Line = Hex("000000"), Hex("3C3C3C"), Hex("000000")
	s.IsothermHot, s.IsothermCold = Hex("8A8A8A"), Hex("2A2A2A")
	s.PathColours = []Colour{Hex("000000")}
	s.PathCore = max(0.9, s.MinLine) // as wide as the two lines beside it together
	s.Path = s.PathCore + max(1, 2*s.MinLine)
	s.PathDashes = [][]float64{nil, {2.4, 0.8}, {0.9, 0.9}, {4.2, 0.8, 0.8, 0.8}}
	s.SolidDash = [][]float64{{0.5, 0.7}}
	return s
}

// rampSteps is the number of steps of the scale of temperatures: each is then
// smaller than what is seen between neighbouring areas.
const rampSteps = 32

// Shaded returns the style with fields coloured by the liquidus temperature.
// Isotherms and numbers are darker, to be read on the deepest shade.
func (s Style) Shaded() Style {
	s.Ramp = temperatureRamp(rampSteps)
	s.Muted = Hex("352F2A")
	s.IsothermHot, s.IsothermCold = Hex("665848"), Hex("2B2018")
	return s
}

func (s Style) orDefault() Style {
	if s.Base == 0 {
		return ColourStyle()
	}
	return s
}

// stroke returns a solid stroke of the given width in pt, never finer than the
// style allows.
func (s Style) stroke(pt float64, c Colour) *Stroke {
	return &Stroke{Width: max(pt, s.MinLine) * mmPerPoint, Colour: c, Round: true}
}

func (s Style) dashed(pt float64, c Colour, dash []float64) *Stroke {
	st := s.stroke(pt, c)
	st.Dash = dash
	st.Round = dash == nil
	return st
}

// leading is the distance between two lines of text, mm.
func (s Style) leading() float64 { return 1.26 * s.Base * mmPerPoint }

// pathColour and the two dashes of path number i.
func (s Style) pathColour(i int) Colour { return s.PathColours[i%len(s.PathColours)] }
func (s Style) pathDash(i int) []float64 {
	return s.PathDashes[i%len(s.PathDashes)]
}
func (s Style) solidDash(i int) []float64 { return s.SolidDash[i%len(s.SolidDash)] }

// blend mixes two colours, t = 0 giving a and t = 1 giving b.
func blend(a, b Colour, t float64) Colour {
	f := func(x, y uint8) uint8 { return uint8(float64(x) + t*(float64(y)-float64(x)) + 0.5) }
	return Colour{f(a.R, b.R), f(a.G, b.G), f(a.B, b.B)}
}

var white = Hex("FFFFFF")
