package render

import (
	"fmt"
	"math"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

// Figure is a liquidus projection composed for print, with the paths and
// samples to lay over it. A zero Style is ColourStyle; a zero WidthMM is the
// style's. From 130 mm on the key stands beside the triangle, below that
// under it.
type Figure struct {
	Projection *liquidus.Projection
	Paths      []*descent.Path
	Samples    []Sample
	Groups     []SampleGroup // explained in the key
	Basis      ternary.Basis
	View       *View    // nil for the whole triangle, the first component on top
	Hide       []string // layers to leave out, of Hideable
	Plain      bool     // the key holds points and events, but does not explain symbols
	Style      Style
	WidthMM    float64
	Provenance string // goes into the file's metadata

	shade *shading // nil unless the style shades temperatures
}

// The narrowest and widest figure, mm.
const (
	minWidth = 60.0
	maxWidth = 400.0
)

// drawnWidth is the width at which a figure is composed before it is enlarged, mm,
// from that which is wanted, 0 for the style's.
func (s Style) drawnWidth(mm float64) (float64, error) {
	if mm == 0 {
		mm = s.Width
	}
	if least, most := Widths(s); math.IsNaN(mm) || mm < least || mm > most {
		return 0, &FigureError{What: fmt.Sprintf("a width of %g mm cannot be drawn", mm), Where: "figure width",
			Why: fmt.Sprintf("figures of this style are %g to %g mm wide", least, most), Remedy: "use 84 mm for one column or 174 mm for two"}
	}
	return mm / s.zoom(), nil
}

// drawing is a figure in the making.
type drawing struct {
	*board
	fig     Figure
	pr      *liquidus.Projection
	placed  []placedSample
	curves  []boundaryLine
	iso     []isoline
	heads   []arrow // on boundary curves
	trails  []trail
	noted   []trailMark // events that have a label
	regions []region    // of the fields
	poles   []float64   // radius of the largest circle in each field
}

// layers from the bottom up.
var projectionLayers = []string{"fields", "isotherms", "frame", "boundaries", "bulk solid", "paths",
	"arrowheads", "points", "path symbols", "samples", "labels", "key"}

// Scene lays the figure out. What found no room is named in the scene's
// Description. It reports a FigureError for a missing projection or a width
// that cannot hold a figure.
func (f Figure) Scene() (*Scene, error) {
	d, err := f.draw()
	if err != nil {
		return nil, err
	}
	return d.scene.enlarged(d.style.zoom()), nil
}

// draw composes the figure as it is before it is enlarged by the style's Zoom.
func (f Figure) draw() (*drawing, error) {
	st := f.Style.orDefault()
	var err error
	if f.WidthMM, err = st.drawnWidth(f.WidthMM); err != nil {
		return nil, err
	}
	if err := f.check(); err != nil {
		return nil, err
	}
	if f, st, err = f.hidden(st); err != nil {
		return nil, err
	}
	tri, err := triangle{components: f.Projection.System.Components, basis: f.Basis}.look(f.View)
	if err != nil {
		return nil, err
	}
	f.Projection = tri.cutProjection(f.Projection)
	if f.shade, err = newShading(f, st, tri); err != nil {
		return nil, err
	}
	lay := f.layout(st, tri)
	d := &drawing{board: newBoard(st, lay.tri, f.WidthMM, lay.height, projectionLayers...), fig: f, pr: f.Projection, placed: lay.placed}
	for _, x := range d.pr.Fields {
		d.regions = append(d.regions, d.region(x))
	}
	d.drawKey(lay)
	d.flags()
	d.frame()
	d.boundaries()
	d.paths()
	d.isotherms()
	d.points()
	d.compounds()
	d.samples()
	d.arrows()
	d.pathSymbols()
	d.fields()
	d.words.solve()
	d.cutIsotherms()
	d.unmixed()
	left := d.putWords()
	d.describe(left)
	return d, nil
}

func (f Figure) check() error {
	if f.Projection == nil || f.Projection.System == nil {
		return &FigureError{What: "there is no projection to draw", Where: "figure",
			Why: "the projection or its system is missing", Remedy: "compute the projection first"}
	}
	for _, s := range f.Samples {
		if !s.Composition.Inside(1e-6) || math.IsNaN(s.Composition[0]+s.Composition[1]+s.Composition[2]) {
			return &FigureError{What: fmt.Sprintf("sample %q lies outside the triangle", s.Name), Where: "samples",
				Why: fmt.Sprintf("its mole fractions are %.4g, %.4g, %.4g", s.Composition[0], s.Composition[1], s.Composition[2]), Remedy: "leave it out or recast it"}
		}
	}
	return nil
}

// layout is where triangle and key stand.
type layout struct {
	height     float64
	tri        triangle
	key        table
	keyX, keyY float64 // top left corner
	keyW       float64
	placed     []placedSample
}

const (
	besideFrom = 130.0 // width from which the key stands beside the triangle
	keyMargin  = 1.0   // between key and edge of the page
)

func (f Figure) layout(st Style, tri triangle) layout {
	lay := layout{tri: tri, placed: placeSamples(f, st)}
	if f.WidthMM >= besideFrom {
		f.layoutBeside(st, &lay)
	} else {
		f.layoutUnder(st, &lay)
	}
	return lay
}

func (f Figure) layoutUnder(st Style, lay *layout) {
	lay.tri.side = f.WidthMM - 2*sideMargin
	foot := newFooting(st, lay.tri)
	lay.keyW = f.WidthMM - 2*keyMargin
	lay.key = newKey(f, st, lay.placed, lay.keyW)
	under := 0.0
	if len(lay.key.lines) > 0 {
		under = 3.2 + lay.key.height()
	}
	lay.tri.origin = Point{sideMargin, outerMargin + under + foot.below}
	lay.height = lay.tri.origin.Y + lay.tri.height() + foot.above
	lay.keyX, lay.keyY = keyMargin, outerMargin+lay.key.height()
}

// layoutBeside tries keys of several widths and takes the one that makes the
// figure most compact: the largest triangle among those whose key is not much
// taller than it, or else the lowest figure.
func (f Figure) layoutBeside(st Style, lay *layout) {
	var best layout
	bestScore := math.Inf(-1)
	least := leastKeyWidth(st, lay.tri)
	for _, share := range []float64{0.335, 0.4, 0.44} {
		l := *lay
		l.keyW = max(share*f.WidthMM, least)
		l.key = newKey(f, st, l.placed, l.keyW)
		f.fitBeside(st, &l)
		block := l.height - l.tri.origin.Y + newFooting(st, l.tri).below
		score := l.tri.side - 3*max(0, l.height-1.1*block)
		if score > bestScore {
			best, bestScore = l, score
		}
	}
	*lay = best
}

// fitBeside takes the largest triangle that leaves the key its room at the
// upper right, where the triangle is slim.
func (f Figure) fitBeside(st Style, lay *layout) {
	lay.keyX = f.WidthMM - keyMargin - lay.keyW
	clear := 9.0 // for numbers outside the right edge
	tall := lay.key.height()
	for lay.tri.side = 0.68 * f.WidthMM; lay.tri.side > 0.5*f.WidthMM; lay.tri.side -= 1 {
		foot := newFooting(st, lay.tri)
		h := foot.above + lay.tri.height() + foot.below + outerMargin
		lay.height = max(h, tall+2*outerMargin)
		lay.tri.origin = Point{sideMargin, lay.height - foot.above - lay.tri.height()}
		lay.keyY = lay.height - outerMargin
		low := max(lay.keyY-tall, lay.tri.origin.Y)
		edge := lay.tri.corner(2).X - (low-lay.tri.origin.Y)/math.Sqrt(3)
		words := lay.tri.corner(2).X + sideMargin
		if lay.keyY-tall > lay.tri.origin.Y-1 {
			words = 0
		}
		if max(edge+clear, words+2) <= lay.keyX {
			break
		}
	}
}

func (d *drawing) drawKey(lay layout) {
	if len(lay.key.lines) == 0 {
		return
	}
	lay.key.draw(d.scene.Layer("key"), lay.keyX, lay.keyY, lay.keyW)
	h := lay.key.height()
	d.words.marks = append(d.words.marks, uprightBox(lay.keyX, lay.keyY-h, lay.keyX+lay.keyW, lay.keyY))
}

// flagTexts are the warnings that a figure must carry.
func (d *drawing) flagTexts() []string {
	var out []string
	if w := d.pr.System.Withheld; len(w) > 0 {
		out = append(out, "metastable: without "+strings.Join(w, ", "))
	}
	switch {
	case len(d.pr.Unmixed) > 0:
		out = append(out, "incomplete: two liquids (dots) not resolved")
	case !d.pr.Checks.Passed:
		out = append(out, "incomplete")
	}
	return out
}

// flags sets the warnings at the upper left.
func (d *drawing) flags() {
	st := d.style
	top := d.tri.corner(0)
	apex := newFooting(st, d.tri).lines[0]
	width := max(18, top.X-widest(apex)/2-outerMargin-2.5)
	y := d.scene.Height - outerMargin - CapHeight(st.Base)
	for _, s := range d.flagTexts() {
		var words [][]Run
		for _, w := range strings.Fields(s) {
			words = append(words, FormulaRuns(w, st.Base, Bold))
		}
		for _, runs := range wrap(words, width) {
			d.words.fixed("flag", s, measure(runs), Point{outerMargin, y}, 0, st.Text)
			y -= st.leading()
		}
		y -= 0.6
	}
}

// unmixed dots the liquids that would separate into two, where no word stands.
func (d *drawing) unmixed() {
	l := d.scene.Layer("isotherms")
	for _, x := range d.pr.Unmixed {
		dot := box{d.tri.at(x), Point{1, 0}, 0.4, 0.4}
		free := true
		for _, w := range d.words.labels {
			free = free && (w.chosen < 0 || !w.spots[w.chosen].box.overlaps(dot))
		}
		if free {
			l.Path(PathItem{Path: circle(dot.c, 0.25), Fill: &d.style.Muted, Role: "unmixed"})
		}
	}
}

// putWords draws the labels that found a place and returns the names of those
// that stand nowhere.
func (d *board) putWords() (left []string) {
	l := d.scene.Layer("labels")
	stands := map[string]bool{}
	for _, w := range d.words.labels {
		if w.chosen < 0 {
			continue
		}
		stands[w.role+" "+w.name] = true
		if s := w.spots[w.chosen].lead; s != nil {
			l.Path(PathItem{Path: Polyline([]Point{s.a, s.b}, false), Stroke: d.style.stroke(d.style.Lead, d.style.Muted), Role: "leader"})
			if w.role == "field" {
				l.Path(PathItem{Path: circle(s.a, 0.3), Fill: &d.style.Muted, Role: "leader end"})
			}
		}
		l.Text(w.item())
	}
	for _, w := range d.words.labels {
		if name := w.role + " " + w.name; !stands[name] {
			left = append(left, name)
			stands[name] = true
		}
	}
	return left
}

// describe fills in the metadata: a text that stands for the figure.
func (d *drawing) describe(left []string) {
	sys := d.pr.System
	title := sys.Title
	if title == "" {
		title = sys.Name
	}
	d.scene.Title = title
	d.scene.Subject = "Liquidus projection"
	d.scene.Provenance = d.fig.Provenance
	var s strings.Builder
	c := sys.Components
	fmt.Fprintf(&s, "Liquidus projection of %s–%s–%s, %s.", c[0].Symbol, c[1].Symbol, c[2].Symbol, d.tri.basis.Unit())
	for _, f := range d.flagTexts() {
		fmt.Fprintf(&s, " %s.", strings.ToUpper(f[:1])+f[1:])
	}
	seen := map[string]bool{}
	var names []string
	for _, f := range d.pr.Fields {
		n := sys.Solids[f.Solid].Name
		if f.TwoLiquids {
			n = "two liquids"
		}
		if !seen[n] {
			seen[n] = true
			names = append(names, n)
		}
	}
	if len(names) > 0 {
		fmt.Fprintf(&s, " Primary fields: %s.", strings.Join(names, ", "))
	}
	for _, n := range shownNodes(d.pr) {
		p := d.tri.percents(n.Liquid)
		fmt.Fprintf(&s, " %s: %s, %.0f °C, %s %s, %s %s, %s %s; %s.", n.ID, n.Kind, celsius(n.T),
			c[0].Symbol, p[0], c[1].Symbol, p[1], c[2].Symbol, p[2], reaction(sys, n))
	}
	for _, p := range d.placed {
		if p.trail >= 0 {
			path := d.fig.Paths[p.trail]
			fmt.Fprintf(&s, " Path of %s from %.0f to %.0f °C.", process(path), celsius(path.Steps[0].T), celsius(path.EndT))
		}
	}
	for _, p := range d.placed {
		if p.Name != "" && !d.tri.shows(p.Composition) {
			left = append(left, p.Name+" (outside the view)")
		}
	}
	if len(left) > 0 {
		fmt.Fprintf(&s, " Left out for want of room: %s.", strings.Join(left, "; "))
	}
	d.scene.Description = s.String()
}
