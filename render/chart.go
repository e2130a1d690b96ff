package render

import (
	"fmt"
	"math"
	"slices"

	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
)

// ChartKind is what a chart of a path shows.
type ChartKind string

const (
	PhaseAmounts ChartKind = "phases" // amounts of all phases, one over the other
	LiquidChart  ChartKind = "liquid" // composition of the liquid
	HeatChart    ChartKind = "heat"   // heat released, or on melting taken up
)

// ChartKinds are the kinds, in the order in which they are listed.
func ChartKinds() []ChartKind { return []ChartKind{PhaseAmounts, LiquidChart, HeatChart} }

// Against is what a chart is drawn against.
type Against string

const (
	AgainstTemperature Against = "temperature"
	AgainstMelt        Against = "melt" // share of the bulk that is liquid
)

// Chart is a diagram of a path against temperature or share of melt, composed for
// print. Amounts and compositions are in the basis. A zero Style is ColourStyle; a
// zero WidthMM is the style's.
type Chart struct {
	Path       *descent.Path
	Kind       ChartKind
	Against    Against // "" is AgainstTemperature
	Basis      ternary.Basis
	Style      Style
	WidthMM    float64
	Provenance string
}

// Proportions of a chart: its height as a share of its width, within limits in mm.
const (
	chartShape = 0.72
	chartLeast = 40.0
	chartMost  = 90.0
)

var chartLayers = []string{"areas", "frame", "curves", "labels"}

// chart is a chart in the making.
type chart struct {
	plot
	f    Chart
	runs []chartRun
}

// chartRun is one curve: values against the x axis in the order of the path.
type chartRun struct {
	name   string
	pts    []Point // in the axes' units
	number int
}

// Scene lays the chart out. It reports a FigureError for a missing path, an unknown
// kind or a width that cannot hold a figure.
func (f Chart) Scene() (*Scene, error) {
	if f.Path == nil || len(f.Path.Steps) < 2 {
		return nil, &FigureError{What: "there is no path to chart", Where: "figure", Why: "the path is missing or has no steps", Remedy: "follow a path first"}
	}
	if f.Against == "" {
		f.Against = AgainstTemperature
	}
	if !slices.Contains(ChartKinds(), f.Kind) || f.Against != AgainstTemperature && f.Against != AgainstMelt {
		return nil, &FigureError{What: fmt.Sprintf("there is no chart of %q against %q", f.Kind, f.Against), Where: "figure", Remedy: "use phases, liquid or heat against temperature or melt"}
	}
	st := f.Style.orDefault()
	var err error
	if f.WidthMM, err = st.drawnWidth(f.WidthMM); err != nil {
		return nil, err
	}
	return f.draw(st).scene.enlarged(st.zoom()), nil
}

// abscissa is the place of a step on the x axis.
func (f Chart) abscissa(s descent.Step) float64 {
	if f.Against == AgainstMelt {
		return 100 * melt(s, f.Basis)
	}
	return celsius(s.T)
}

// axes are the two scales; the unit of y stands for what it measures.
func (f Chart) axes(runs []chartRun) (x, y axis) {
	if f.Against == AgainstMelt {
		x = axis{from: 0, to: 100, step: 20, unit: "melt, " + f.Basis.Unit()}
	} else {
		lo, hi := math.Inf(1), math.Inf(-1)
		for _, s := range f.Path.Steps {
			lo, hi = min(lo, celsius(s.T)), max(hi, celsius(s.T))
		}
		room := max(2, 0.06*(hi-lo))
		x = newAxis(lo-room, hi+room, 7, "temperature, °C")
	}
	switch f.Kind {
	case HeatChart:
		top := 0.0
		for _, r := range runs {
			for _, p := range r.pts {
				top = max(top, p.Y)
			}
		}
		y = newAxis(0, max(1, 1.06*top), 6, "J/g")
	default:
		y = axis{from: 0, to: 100, step: 20, unit: f.Basis.Unit()}
	}
	return x, y
}

func (f Chart) draw(st Style) *chart {
	c := &chart{f: f}
	switch f.Kind {
	case PhaseAmounts:
		c.runs = f.amounts()
	case LiquidChart:
		c.runs = f.liquids()
	default:
		r := chartRun{name: "heat released"}
		if f.Path.Mode.Melts() {
			r.name = "heat taken up"
		}
		for _, s := range f.Path.Steps {
			r.pts = append(r.pts, Point{f.abscissa(s), s.Heat})
		}
		c.runs = []chartRun{r}
	}
	c.x, c.y = f.axes(c.runs)
	left := outerMargin + max(c.y.numberWidth(st), tickLength+tickGap+TextWidth(PlainRuns(c.y.unit, st.Base, Regular)))
	right := f.WidthMM - sideMargin
	foot := outerMargin + numberHeight(st) + 0.5*st.leading() + CapHeight(st.Base) + Descent(st.Base)
	tall := max(chartLeast, min(chartMost, chartShape*(right-left)))
	head := tickLength + tickGap + CapHeight(st.Base) + 2*Descent(st.Base) + outerMargin
	c.board = newBoard(st, triangle{components: f.Path.System.Components, basis: f.Basis}, f.WidthMM, foot+tall+head, chartLayers...)
	c.lo, c.hi = Point{left, foot}, Point{right, foot + tall}
	c.frame()
	t := measure(PlainRuns(c.x.unit, st.Base, Regular))
	c.words.fixed("basis", c.x.unit, t, Point{(left + right - t.w) / 2, outerMargin + Descent(st.Base)}, 0, st.Text)
	if w := f.Path.System.Withheld; len(w) > 0 || !f.Path.Checks.Passed {
		c.warn()
	}
	if f.Kind == PhaseAmounts {
		c.areas()
	} else {
		c.curves()
	}
	c.words.solve()
	c.describe(c.putWords())
	return c
}

// warn sets above the frame what is to be known of the path.
func (c *chart) warn() {
	s := metastable(c.f.Path.System)
	if !c.f.Path.Checks.Passed {
		if s != "" {
			s += "; "
		}
		s += "incomplete"
	}
	t := measure(FormulaRuns(s, c.style.Base, Bold))
	c.words.fixed("flag", s, t, Point{c.hi.X - t.w, c.hi.Y + tickLength + tickGap + t.down}, 0, c.style.Text)
}

// amounts are the upper limits of the phases, in order from below: the solids as
// they appear, the liquid on top.
func (f Chart) amounts() []chartRun {
	var order []int
	for _, s := range f.Path.Steps {
		for _, a := range s.Solids {
			if !slices.Contains(order, a.State.Phase) {
				order = append(order, a.State.Phase)
			}
		}
	}
	if f.Path.Mode.Melts() {
		slices.Reverse(order)
	}
	runs := make([]chartRun, len(order)+1)
	for k, phase := range order {
		runs[k].name = f.Path.System.Solids[phase].Symbol
	}
	runs[len(order)].name = "L"
	if f.Path.Mode == descent.FractionalMelting {
		runs[len(order)].name = "all melt"
	}
	for _, s := range f.Path.Steps {
		at := f.abscissa(s)
		sum := 0.0
		for k, phase := range order {
			for _, a := range s.Solids {
				if a.State.Phase != phase {
					continue
				}
				if f.Basis == ternary.Mole {
					sum += a.Mole * (a.State.C[0] + a.State.C[1] + a.State.C[2])
				} else {
					sum += a.Mass
				}
			}
			runs[k].pts = append(runs[k].pts, Point{at, 100 * sum})
		}
		runs[len(order)].pts = append(runs[len(order)].pts, Point{at, 100})
	}
	return runs
}

// liquids are the three fractions of the liquid.
func (f Chart) liquids() []chartRun {
	runs := make([]chartRun, 3)
	cs := f.Path.System.Components
	for k := range runs {
		runs[k] = chartRun{name: cs[k].Symbol, number: k}
	}
	for i, s := range f.Path.Steps {
		if s.MeltMass == 0 && i == len(f.Path.Steps)-1 && f.Against == AgainstMelt && !f.Path.Mode.Melts() {
			// the last drop has the composition of the liquid before it
			s.Liquid = f.Path.Steps[i-1].Liquid
		}
		x := cs.Fractions(s.Liquid, f.Basis)
		for k := range runs {
			runs[k].pts = append(runs[k].pts, Point{f.abscissa(s), 100 * x[k]})
		}
	}
	return runs
}

// line is a run on the page, broken where fractional melting leaps.
func (c *chart) line(r chartRun) (out [][]Point) {
	var pts []Point
	for i, p := range r.pts {
		if i > 0 && leaps(c.f.Path, i) && c.f.Kind == LiquidChart {
			out = append(out, pts)
			pts = nil
		}
		pts = append(pts, c.at(p.X, p.Y))
	}
	return append(out, pts)
}

// areas fills the phases one over the other, each with its name.
func (c *chart) areas() {
	st := c.style
	l := c.scene.Layer("areas")
	below := []Point{}
	for _, p := range c.runs[0].pts {
		below = append(below, c.at(p.X, 0))
	}
	for k, r := range c.runs {
		upper := c.line(r)[0]
		ring := append(slices.Clone(below), reversed(upper)...)
		ring = distinct(ring, true)
		if len(ring) > 2 && math.Abs(area(ring)) > 0.01 {
			if area(ring) < 0 {
				slices.Reverse(ring)
			}
			if n := len(st.Tints); n > 0 {
				tint := st.Tints[(k+2)%n]
				if r.name == "L" || r.name == "all melt" {
					tint = st.Tints[1%n]
				}
				l.Path(PathItem{Path: Polyline(ring, true), Fill: &tint, Role: "area"})
			}
			frame := uprightBox(c.lo.X, c.lo.Y, c.hi.X, c.hi.Y)
			c.nameRegion(region{rings: [][]Point{ring}}, r.name, func(b box) (float64, bool) {
				return 12, frame.contains(b.c) // it could be taken for the name of the area it stands in
			})
		}
		if k < len(c.runs)-1 {
			if line := distinct(upper, false); len(line) > 1 {
				c.scene.Layer("curves").Path(PathItem{Path: Polyline(line, false), Stroke: st.stroke(st.Boundary, st.Line), Role: "curve"})
				c.words.lines.add(rigid, straight(line).chords(2)...)
			}
		}
		below = upper
	}
	// the ends of the path
	for _, s := range []descent.Step{c.f.Path.Steps[0], c.f.Path.Steps[len(c.f.Path.Steps)-1]} {
		at := c.f.abscissa(s)
		a, b := c.at(at, 0), c.at(at, 100)
		if a.X > c.lo.X+0.1 && a.X < c.hi.X-0.1 {
			c.scene.Layer("curves").Path(PathItem{Path: Polyline([]Point{a, b}, false), Stroke: st.stroke(st.Polymorph, st.Line), Role: "end"})
			c.words.lines.add(rigid, segment{a, b})
		}
	}
}

func reversed(pts []Point) []Point {
	out := slices.Clone(pts)
	slices.Reverse(out)
	return out
}

// curves draws the runs, each with its name beside it.
func (c *chart) curves() {
	st := c.style
	l := c.scene.Layer("curves")
	for _, r := range c.runs {
		var whole Path
		var spots []spot
		t := measure(FormulaRuns(r.name, st.Base, Regular))
		for _, pts := range c.line(r) {
			pts = distinct(pts, false)
			if len(pts) < 2 {
				continue
			}
			whole.Append(Polyline(pts, false))
			a := straight(pts)
			c.words.lines.add(rigid, a.chords(1.5)...)
			for k := 1; k < 12; k++ {
				f := float64(k) / 12
				q := a.at(f * a.length())
				dir := a.nearest(q)
				for _, side := range []float64{1, -1} {
					n := dir.left().times(side)
					d := math.Abs(n.X)*t.w/2 + math.Abs(n.Y)*(t.up+t.down)/2 + 1
					spots = append(spots, spot{c: q.plus(n.times(d)), cost: 3*math.Abs(f-0.5) + 0.1*(1-side)})
				}
			}
		}
		if whole.Empty() {
			continue
		}
		st.drawPath(l, whole, r.number, "curve")
		c.words.ask(label{role: "curve", name: r.name, colour: st.Text, wordings: []wording{t}, rank: 1, must: true, spots: spots})
	}
}

// describe fills in the metadata.
func (c *chart) describe(left []string) {
	p := c.f.Path
	c.scene.Title = p.System.Title
	if c.scene.Title == "" {
		c.scene.Title = p.System.Name
	}
	c.scene.Provenance = c.f.Provenance
	what := map[ChartKind]string{PhaseAmounts: "Amounts of the phases", LiquidChart: "Composition of the liquid", HeatChart: "Heat"}[c.f.Kind]
	c.scene.Subject = what + " against " + string(c.f.Against)
	c.scene.Description = fmt.Sprintf("%s, %s, from %.0f to %.0f °C in %s.", c.scene.Subject, process(p), celsius(p.Steps[0].T), celsius(p.EndT), c.scene.Title)
	if len(left) > 0 {
		c.scene.Description += fmt.Sprintf(" Left out for want of room: %v.", left)
	}
}

// metastable is the mark of a system without some of its solids, or empty.
func metastable(sys *gibbs.System) string {
	if len(sys.Withheld) == 0 {
		return ""
	}
	s := "metastable: without "
	for i, w := range sys.Withheld {
		if i > 0 {
			s += ", "
		}
		s += w
	}
	return s
}
