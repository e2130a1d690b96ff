package render

import (
	"fmt"
	"slices"
	"strings"

	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

// Layer names that Figure.Hide takes, in the order in which they are listed.
var hideable = []string{"bulk solid", "fields", "isotherms", "key", "names", "paths", "points", "samples"}

// Hideable lists the layers that a projection can be drawn without.
func Hideable() []string { return slices.Clone(hideable) }

// hidden leaves out of a figure what it is to be drawn without. The layers it is made
// of are named in Hide.
func (f Figure) hidden(st Style) (Figure, Style, error) {
	for _, name := range f.Hide {
		if !slices.Contains(hideable, name) {
			return f, st, &FigureError{What: fmt.Sprintf("there is no layer %q to leave out", name), Where: "hide", Remedy: "the layers are " + strings.Join(hideable, ", ")}
		}
	}
	p := *f.Projection
	if f.hides("isotherms") {
		p.Isotherms = nil
	}
	if f.hides("points") {
		p.Nodes = slices.DeleteFunc(slices.Clone(p.Nodes), func(n liquidus.Node) bool { return n.Kind != liquidus.LoopStart })
		p.Extrema = nil
	}
	f.Projection = &p
	if f.hides("fields") {
		st.Tints, st.Ramp = nil, nil
	}
	if f.hides("samples") {
		f.Samples, f.Groups = nil, nil
	}
	if f.hides("paths") {
		f.Paths = nil
	}
	return f, st, nil
}

func (f Figure) hides(layer string) bool { return slices.Contains(f.Hide, layer) }

// Strokes of a style that may be set for one figure, by the layer they belong to.
var strokes = map[string]func(*Style) []*float64{
	"boundaries": func(s *Style) []*float64 { return []*float64{&s.Boundary, &s.Polymorph} },
	"bulk solid": func(s *Style) []*float64 { return []*float64{&s.SolidPath} },
	"frame":      func(s *Style) []*float64 { return []*float64{&s.Frame} },
	"isotherms":  func(s *Style) []*float64 { return []*float64{&s.Isotherm, &s.IsothermHeavy} },
	"paths":      func(s *Style) []*float64 { return []*float64{&s.Path} },
	"ticks":      func(s *Style) []*float64 { return []*float64{&s.Tick} },
}

// WithStroke returns the style with the lines of a layer of another width, pt; finer
// ones of the same layer keep their proportion. It reports a FigureError for an unknown
// layer or a width that the style does not allow.
func (s Style) WithStroke(layer string, pt float64) (Style, error) {
	set, ok := strokes[layer]
	if !ok {
		var names []string
		for name := range strokes {
			names = append(names, name)
		}
		slices.Sort(names)
		return s, &FigureError{What: fmt.Sprintf("there is no layer %q with lines of its own", layer), Where: "lines", Remedy: "the layers are " + strings.Join(names, ", ")}
	}
	if !(pt >= s.MinLine && pt <= 10) {
		return s, &FigureError{What: fmt.Sprintf("lines of %g pt cannot be drawn", pt), Where: "lines", Why: fmt.Sprintf("this style allows %g to 10 pt", s.MinLine), Remedy: "choose another width"}
	}
	list := set(&s)
	k := pt / *list[0]
	for _, w := range list {
		*w *= k
	}
	return s, nil
}

// hasPath reports that there is a path to explain.
func hasPath(list []*descent.Path) bool {
	return slices.ContainsFunc(list, func(p *descent.Path) bool { return p != nil })
}
