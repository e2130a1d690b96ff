package render

import (
	"fmt"
	"slices"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/section"
)

// Isothermal is an isothermal section, or a series of them on one page, composed
// for print. A zero Style is ColourStyle; a zero WidthMM is the style's. A series
// is set in rows, in the order given, each panel with its letter.
type Isothermal struct {
	Sections   []*section.Section
	Samples    []Sample
	Basis      ternary.Basis
	Style      Style
	WidthMM    float64
	Provenance string
}

// Widths of panels, mm: from panelLeast on a series has as many panels in a row
// as fit; a single section is no wider than panelMost.
const (
	panelLeast = 56.0
	panelMost  = 112.0
	panelGap   = 4.0
)

var isothermalLayers = []string{"regions", "tie lines", "frame", "boundaries", "points", "samples", "labels"}

// Scene lays the figure out. It reports a FigureError for a missing section or a
// width that cannot hold a figure.
func (f Isothermal) Scene() (*Scene, error) {
	if len(f.Sections) == 0 {
		return nil, &FigureError{What: "there is no section to draw", Where: "figure", Why: "the list is empty", Remedy: "compute a section first"}
	}
	st := f.Style.orDefault()
	var err error
	if f.WidthMM, err = st.drawnWidth(f.WidthMM); err != nil {
		return nil, err
	}
	n := len(f.Sections)
	across := max(1, min(n, int((f.WidthMM+panelGap)/(panelLeast+panelGap))))
	width := (f.WidthMM - float64(across-1)*panelGap) / float64(across)
	var panels []*Scene
	tall := 0.0
	for i, s := range f.Sections {
		letter := ""
		if n > 1 {
			letter = string(rune('a' + i%26))
		}
		p := f.panel(s, min(width, panelMost), letter)
		panels = append(panels, p)
		tall = max(tall, p.Height)
	}
	down := (n + across - 1) / across
	page := NewScene(f.WidthMM, float64(down)*tall+float64(down-1)*panelGap)
	for _, name := range isothermalLayers {
		page.Layer(name)
	}
	for i, p := range panels {
		x := float64(i%across)*(width+panelGap) + (width-p.Width)/2
		y := page.Height - float64(i/across)*(tall+panelGap) - p.Height
		place(page, p, x, y)
	}
	f.describe(page)
	return page.enlarged(st.zoom()), nil
}

// place copies a scene's items onto another, moved by x and y.
func place(page, part *Scene, x, y float64) {
	move := func(p Point) Point { return Point{p.X + x, p.Y + y} }
	for _, l := range part.Layers {
		to := page.Layer(l.Name)
		for _, it := range l.Items {
			switch v := it.(type) {
			case *PathItem:
				c := *v
				c.Path = v.Path.Transform(move)
				to.Path(c)
			case *TextItem:
				c := *v
				c.X, c.Y = v.X+x, v.Y+y
				to.Text(c)
			}
		}
	}
}

// panel draws one section on a page of its own.
type panel struct {
	*board
	s       *section.Section
	ties    []arc
	handles map[[2]Point][2]Point // of the curves between points of phase boundaries
}

func (f Isothermal) panel(s *section.Section, width float64, letter string) *Scene {
	st := f.Style.orDefault()
	cs := s.System.Components
	tri := triangle{components: cs, basis: f.Basis, side: width - 2*sideMargin}
	foot := newFooting(st, tri)
	tri.origin = Point{sideMargin, outerMargin + foot.below}
	height := tri.origin.Y + tri.height() + foot.above
	p := &panel{board: newBoard(st, tri, width, height, isothermalLayers...), s: s}
	p.bend()
	p.heading(letter)
	p.frame()
	for i := range s.Regions {
		p.region(&s.Regions[i])
	}
	p.critical()
	p.samples(f.Samples)
	for i := range s.Regions {
		p.name(&s.Regions[i])
	}
	p.words.solve()
	p.cutTies()
	p.putWords()
	return p.scene
}

// heading states the letter, the temperature, and what is to be known of it.
func (p *panel) heading(letter string) {
	st := p.style
	y := p.scene.Height - outerMargin - CapHeight(st.Base)
	line := fmt.Sprintf("%.0f °C", celsius(p.s.T))
	if letter != "" {
		line = letter + "  " + line
	}
	lines := []string{line}
	if w := p.s.System.Withheld; len(w) > 0 {
		lines = append(lines, "metastable:", "without "+strings.Join(w, ", "))
	}
	if !p.s.Checks.Passed {
		lines = append(lines, "incomplete")
	}
	for _, s := range lines {
		p.words.fixed("heading", s, measure(PlainRuns(s, st.Base, Bold)), Point{outerMargin, y}, 0, st.Text)
		y -= st.leading()
	}
}

// bend finds the curves through the computed points of every phase boundary, so
// that the regions on its two sides share them.
func (p *panel) bend() {
	p.handles = map[[2]Point][2]Point{}
	for i := range p.s.Regions {
		r := &p.s.Regions[i]
		if len(r.Phases) != 2 {
			continue
		}
		a, b := r.Sides()
		for _, side := range [][]ternary.Composition{a, b} {
			for _, c := range p.side(side).segs {
				p.handles[[2]Point{c[0], c[3]}] = [2]Point{c[1], c[2]}
				p.handles[[2]Point{c[3], c[0]}] = [2]Point{c[2], c[1]}
			}
		}
	}
}

// side is the curve of one side of a region of two phases.
func (p *panel) side(xs []ternary.Composition) arc {
	return smooth(p.tri.all(xs), false, p.tri.rim())
}

// bent is the path of an outline, curved where it is a phase boundary.
func (p *panel) bent(ring []Point) Path {
	var out Path
	for i, a := range ring {
		if i == 0 {
			out.MoveTo(a.X, a.Y)
		}
		b := ring[(i+1)%len(ring)]
		if h, ok := p.handles[[2]Point{a, b}]; ok {
			out.CubeTo(h[0].X, h[0].Y, h[1].X, h[1].Y, b.X, b.Y)
		} else {
			out.LineTo(b.X, b.Y)
		}
	}
	out.Close()
	return out
}

// ring puts an outline on the page, anticlockwise or not.
func (p *panel) ring(xs []ternary.Composition, anticlockwise bool) []Point {
	pts := distinct(p.tri.all(xs), true)
	if len(pts) > 2 && (area(pts) > 0) != anticlockwise {
		slices.Reverse(pts)
	}
	return pts
}

// region fills and outlines a region and draws its tie lines.
func (p *panel) region(r *section.Region) {
	st := p.style
	outline := p.ring(r.Outline, true)
	if len(outline) > 2 {
		path := p.bent(outline)
		for _, h := range r.Holes {
			path.Append(p.bent(p.ring(h, false)))
		}
		if c, ok := p.tint(r); ok {
			p.scene.Layer("regions").Path(PathItem{Path: path, Fill: &c, Role: "region"})
		}
	}
	if len(r.Phases) == 3 {
		p.line("boundaries", straight(append(outline, outline[0])), true, st.Polymorph, "three-phase triangle")
	}
	if len(r.Phases) != 2 {
		return
	}
	for i, t := range r.TieLines {
		pts := p.tri.all(t.Ends[:])
		if i == 0 || i == len(r.TieLines)-1 {
			p.line("boundaries", straight(pts), false, st.Polymorph, "limiting tie line")
			continue
		}
		if pts[0].distance(pts[1]) > 0.3 {
			p.ties = append(p.ties, straight(pts))
			p.words.lines.add(faint, straight(pts).chords(2.5)...)
		}
	}
	a, b := r.Sides()
	for _, side := range [][]ternary.Composition{a, b} {
		p.line("boundaries", p.side(side), false, st.Boundary, "phase boundary")
	}
}

// cutTies draws the tie lines with gaps where words stand.
func (p *panel) cutTies() {
	gaps := p.gaps()
	l := p.scene.Layer("tie lines")
	for _, tie := range p.ties {
		var path Path
		for _, piece := range tie.without(tie.inside(gaps), 0.7) {
			path.Append(piece.path())
		}
		if !path.Empty() {
			l.Path(PathItem{Path: path, Stroke: p.style.stroke(p.style.Isotherm, p.style.Muted), Role: "tie line"})
		}
	}
}

// line draws a rigid line of a layer, closed to a ring if asked.
func (p *panel) line(layer string, line arc, closed bool, width float64, role string) {
	if line.empty() {
		return
	}
	path := line.path()
	if closed {
		path.Close()
	}
	p.scene.Layer(layer).Path(PathItem{Path: path, Stroke: p.style.stroke(width, p.style.Line), Role: role})
	p.words.lines.add(rigid, line.chords(2.5)...)
}

// tint is white for two phases, a pale tint for one, a fuller one for three.
func (p *panel) tint(r *section.Region) (Colour, bool) {
	t := p.style.Tints
	if len(t) == 0 {
		return Colour{}, false
	}
	switch len(r.Phases) {
	case 1:
		return t[1%len(t)], true
	case 3:
		return t[0], true
	}
	return Colour{}, false
}

// critical marks the points at which two phases become one.
func (p *panel) critical() {
	l := p.scene.Layer("points")
	for _, x := range p.s.Critical {
		c := p.tri.at(x)
		p.mark(l, PathItem{Path: circle(c, 0.6), Fill: &p.style.Line, Role: "marker"}, c, 0.6)
	}
}

// samples marks and names compositions.
func (p *panel) samples(list []Sample) {
	st := p.style
	l := p.scene.Layer("samples")
	for i, s := range list {
		c := p.tri.at(s.Composition)
		fill := st.pathColour(i)
		p.mark(l, PathItem{Path: sampleShape(i, c, 1.0), Fill: &fill, Role: "marker"}, c, 1.1)
		t := measure(PlainRuns(s.Name, st.Base, Bold))
		p.words.ask(label{role: "sample", name: s.Name, colour: st.Text, wordings: []wording{t}, rank: 1, spots: about(c, 1.6, 0, t, 0, 1, 2.5, 5)})
	}
}

// name asks for a region's label: its phases joined by plus signs.
func (p *panel) name(r *section.Region) {
	var out region
	ring := p.ring(r.Outline, true)
	if len(ring) < 3 {
		return
	}
	out.rings = append(out.rings, ring)
	for _, h := range r.Holes {
		out.rings = append(out.rings, p.ring(h, false))
	}
	p.nameRegion(out, assemblage(p.s.System, r.Phases), func(b box) (float64, bool) {
		if p.tri.rim().excess(b.c) < 2 {
			return 12, true // it could be taken for the name of the region it stands in
		}
		return 0, true
	})
}

// describe fills in the metadata.
func (f Isothermal) describe(page *Scene) {
	sys := f.Sections[0].System
	page.Title = sys.Title
	if page.Title == "" {
		page.Title = sys.Name
	}
	page.Subject = "Isothermal section"
	page.Provenance = f.Provenance
	var s strings.Builder
	c := sys.Components
	for _, x := range f.Sections {
		n := x.Checks.OneTwoThree
		fmt.Fprintf(&s, "Isothermal section of %s–%s–%s at %.0f °C, %s: %d one-phase, %d two-phase and %d three-phase regions. ",
			c[0].Symbol, c[1].Symbol, c[2].Symbol, celsius(x.T), f.Basis.Unit(), n[0], n[1], n[2])
	}
	page.Description = strings.TrimSpace(s.String())
}
