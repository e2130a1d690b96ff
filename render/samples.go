package render

import (
	"math"

	"thalweg/ternary"
)

// Sample is a composition to be marked.
type Sample struct {
	Name        string
	Composition ternary.Composition // mole fractions of the components
	Symbol      int                 // 1, 2, …: the same symbol for all of one kind; 0 for one after another
	Colour      int                 // likewise; 0 for the colour of lines
}

// SampleGroup is what a symbol or a colour of samples stands for, as the key has it.
type SampleGroup struct {
	Name           string
	Symbol, Colour int
}

// placedSample is a sample with its symbol.
type placedSample struct {
	Sample
	colour Colour
	shape  int
	trail  int // index of its path in Figure.Paths, or -1
}

// placeSamples joins samples and paths: a path that starts at a sample shares
// its symbol, one that starts nowhere else brings a nameless sample.
func placeSamples(f Figure, st Style) []placedSample {
	var out []placedSample
	taken := make([]bool, len(f.Paths))
	for _, s := range f.Samples {
		p := placedSample{Sample: s, colour: st.Line, shape: len(out), trail: -1}
		if s.Symbol > 0 {
			p.shape = s.Symbol - 1
		}
		if s.Colour > 0 {
			p.colour = st.pathColour(s.Colour - 1)
		}
		for i, path := range f.Paths {
			if path != nil && path.Bulk.Distance(s.Composition) < 1e-4 {
				taken[i] = true
				if p.trail < 0 {
					p.trail, p.colour = i, st.pathColour(i)
				}
			}
		}
		out = append(out, p)
	}
	shape := len(out)
	if len(f.Groups) > 0 { // a symbol that stands for no group
		shape = 0
		for _, g := range f.Groups {
			shape = max(shape, g.Symbol)
		}
	}
	for i, path := range f.Paths {
		if path != nil && !taken[i] {
			out = append(out, placedSample{Sample: Sample{Composition: path.Bulk}, colour: st.pathColour(i), shape: shape, trail: i})
			shape++
		}
	}
	return out
}

// sampleShape is the outline of symbol number k with the same visual weight
// for each.
func sampleShape(k int, c Point, r float64) Path {
	switch k % 4 {
	case 1:
		return diamond(c, 1.22*r)
	case 2:
		return polygon(c, 1.25*r, 3, 90)
	case 3:
		return square(c, 0.86*r)
	}
	return circle(c, r)
}

// polygon is a regular one with a corner at the given angle, degrees.
func polygon(c Point, r float64, n int, deg float64) Path {
	pts := make([]Point, n)
	for i := range pts {
		pts[i] = c.plus(polar(deg + 360*float64(i)/float64(n)).times(r))
	}
	return Polyline(pts, true)
}

// samples draws the symbols and asks for the names.
func (d *drawing) samples() {
	l := d.scene.Layer("samples")
	st := d.style
	for _, s := range d.placed {
		if !d.tri.shows(s.Composition) {
			continue
		}
		q := d.tri.at(s.Composition)
		c := s.colour
		d.mark(l, PathItem{Path: sampleShape(s.shape, q, sampleRadius), Fill: &c, Stroke: st.stroke(0.5, white)}, q, sampleRadius*1.1)
		if s.Name == "" {
			continue
		}
		t := measure(FormulaRuns(s.Name, st.Base, Bold))
		spots := about(q, math.Sqrt2*sampleRadius, 0, t, 0.4, 0.9, 1.6, 2.5, 3.6)
		d.words.ask(label{role: "sample label", name: s.Name, colour: st.Text, wordings: []wording{t},
			spots: append(spots, leaders(q, 1.5, 0, t, 5, 8, 11, 14, 18, 23, 29)...), rank: 3, must: true})
	}
}
