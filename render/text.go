package render

import "math"

// Proportions of formula subscripts, in em of the base size. At 8 pt the
// subscript is 6 pt, the smallest most journals print.
const (
	subscriptScale = 0.75
	subscriptDrop  = 0.16
)

// PlainRuns returns s as one run of the given size (pt) and face; none for
// an empty s.
func PlainRuns(s string, size float64, f Font) []Run {
	if s == "" {
		return nil
	}
	return []Run{{Text: s, Font: f, Size: size}}
}

// FormulaRuns returns s with the counts in chemical formulas set as
// subscripts. Words that are not formulas stay as they are, and so do
// leading coefficients: "3Al2O3.2SiO2" keeps its 3 and second 2 on the
// baseline, and its full stop becomes a raised dot.
func FormulaRuns(s string, size float64, f Font) []Run {
	var runs []Run
	for _, piece := range splitFormulas(s) {
		r := Run{Text: piece.text, Font: f, Size: size}
		if piece.sub {
			r.Size = size * subscriptScale
			r.Rise = -subscriptDrop * size * mmPerPoint
		}
		runs = append(runs, r)
	}
	return runs
}

// TextWidth returns the advance of the runs in mm, kerning included.
func TextWidth(runs []Run) float64 {
	w := 0.0
	for _, r := range runs {
		if f, err := loadFace(r.Font); err == nil {
			w += f.width(r.Text) * r.Size * mmPerPoint
		}
	}
	return w
}

// CapHeight returns the height of capitals above the baseline, mm, at a size
// in pt.
func CapHeight(size float64) float64 {
	return verticalMetric(size, func(f *face) int16 { return f.sfnt.OS2.SCapHeight })
}

// XHeight returns the height of a small x above the baseline, mm, at a size
// in pt.
func XHeight(size float64) float64 {
	return verticalMetric(size, func(f *face) int16 { return f.sfnt.OS2.SxHeight })
}

// Descent returns the depth of letters such as g and p below the baseline,
// mm, positive, at a size in pt.
func Descent(size float64) float64 {
	return verticalMetric(size, func(f *face) int16 { return -f.sfnt.Hhea.Descender })
}

// verticalMetric scales a metric of the regular face; the other faces agree
// within 0.02 em.
func verticalMetric(size float64, units func(*face) int16) float64 {
	f, err := loadFace(Regular)
	if err != nil {
		return 0
	}
	return float64(units(f)) / f.upem * size * mmPerPoint
}

// Outline returns the text as a path on the page, for halos and ink boxes.
// Characters the family lacks leave a gap; writing the scene reports them.
func (t TextItem) Outline() Path {
	var out Path
	sin, cos := math.Sincos(t.Angle * math.Pi / 180)
	x := 0.0
	for _, r := range t.Runs {
		f, err := loadFace(r.Font)
		if err != nil {
			continue
		}
		em := r.Size * mmPerPoint
		for _, g := range f.shape(r.Text) {
			if g.gid != 0 {
				out.Append(f.outline(g.gid).Transform(func(p Point) Point {
					u, v := x+p.X*em, r.Rise+p.Y*em
					return Point{t.X + u*cos - v*sin, t.Y + u*sin + v*cos}
				}))
			}
			x += float64(g.advance+g.kern) / f.upem * em
		}
	}
	return out
}

// label is what messages call the text: its Label, or else what it says.
func (t *TextItem) label() string {
	if t.Label != "" {
		return t.Label
	}
	return t.plain()
}

// plain returns the characters of all runs.
func (t *TextItem) plain() string {
	s := ""
	for _, r := range t.Runs {
		s += r.Text
	}
	return s
}
