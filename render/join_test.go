package render

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	joins "thalweg/ternary/join"
)

// joinFixture is a diagram with the point that is read on it.
type joinFixture struct {
	name string
	d    *joins.Diagram
}

var joinFixtures []joinFixture

// theJoins are edges and inner lines of the built-in systems and of invented ones:
// loops, eutectics, compounds, gaps in liquids and solids, polymorphs.
func theJoins(t *testing.T) []joinFixture {
	t.Helper()
	if joinFixtures != nil {
		return joinFixtures
	}
	add := func(name string, sys *gibbs.System, from, to ternary.Composition) {
		d, err := joins.Compute(sys, from, to, joins.Options{Count: 100})
		if err != nil || !d.Checks.Passed {
			t.Fatalf("%s: %v, %v", name, err, d)
		}
		joinFixtures = append(joinFixtures, joinFixture{name, d})
	}
	for _, name := range systems.Names() {
		f, err := systems.Builtin(name)
		if err != nil {
			t.Fatal(err)
		}
		sys, err := f.AtReference(nil)
		if err != nil {
			t.Fatal(err)
		}
		for k := range 3 {
			add(fmt.Sprintf("%s %d", name, k), sys, ternary.Apex(k), ternary.Apex((k+1)%3))
		}
		add(name+" half", sys, ternary.Composition{0.5, 0.5, 0}, ternary.Apex(2))
		add(name+" inside", sys, ternary.Composition{0.5, 0.2, 0.3}, ternary.Composition{0.1, 0.4, 0.5})
	}
	sys := manifold(t)
	for k := range 3 {
		add(fmt.Sprintf("invented %d", k), sys, ternary.Apex(k), ternary.Apex((k+1)%3))
	}
	add("invented inside", sys, ternary.Composition{0.7, 0.3, 0}, ternary.Composition{0, 0.2, 0.8})
	return joinFixtures
}

// manifold is an invented system with much on its edges: A and B do not mix as liquids,
// B has two forms, B and C make a compound that melts incongruently, and C and A a
// solid solution with a gap.
func manifold(t *testing.T) *gibbs.System {
	t.Helper()
	cs := newIdeal(t).sys.Components
	liquid := gibbs.NewLiquid(cs, gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: 28000}}}}})
	pure := func(symbol string, g gibbs.TFunc, c [3]float64) *gibbs.Phase {
		return (&gibbs.Phase{Symbol: symbol, Name: symbol, Members: []gibbs.EndMember{{Symbol: symbol, C: c, G: g}}}).Prepare()
	}
	b := gibbs.Melting(gibbs.Fusion{T: 1100, H: 22000}, 0)
	k, err := gibbs.CompoundMelting(liquid, [3]float64{0, 1, 2}, gibbs.Fusion{T: 1150, H: 75000}, 0)
	if err != nil {
		t.Fatal(err)
	}
	solution := (&gibbs.Phase{Symbol: "S", Name: "solution", Members: []gibbs.EndMember{
		{Symbol: "Ald", C: ternary.Apex(0), G: gibbs.Melting(gibbs.Fusion{T: 1500, H: 30000}, 0)},
		{Symbol: "Cov", C: ternary.Apex(2), G: gibbs.Melting(gibbs.Fusion{T: 1400, H: 28000}, 0)},
	}, Mixing: gibbs.Mixing{Pairs: []gibbs.Pair{{I: 0, J: 1, L: []gibbs.TFunc{{A: 18000}}}}}}).Prepare()
	return &gibbs.System{Name: "invented", Title: "An invented system", Components: cs, Liquid: liquid, Range: [2]float64{300, 2500}, Solids: []*gibbs.Phase{
		solution, pure("Bev", b, ternary.Apex(1)), pure("Bev-low", gibbs.Transition(b, 850, -3000, 0, 0), ternary.Apex(1)), pure("K", k, [3]float64{0, 1, 2})}}
}

// eachJoin runs a test over every fixture in both widths, styles and bases.
func eachJoin(t *testing.T, test func(t *testing.T, d *joinDrawing)) {
	for _, f := range theJoins(t) {
		for _, st := range []Style{ColourStyle(), InkStyle()} {
			for _, w := range []float64{SingleColumn, DoubleColumn} {
				basis := ternary.Mass
				if st.Ink {
					basis = ternary.Mole
				}
				fig := Join{Diagram: f.d, Basis: basis, WidthMM: w, Style: st}
				x, T := 0.4, f.d.TMin+0.45*(f.d.TMax-f.d.TMin)
				q, err := f.d.Read(x, T)
				if err != nil {
					t.Fatal(err)
				}
				m := JoinMark{Name: "P", X: x, T: T}
				for _, p := range q.Parts {
					m.Phases = append(m.Phases, p.State)
				}
				fig.Marks = []JoinMark{m}
				t.Run(fmt.Sprintf("%s/%g/%s", f.name, w, basis), func(t *testing.T) { test(t, fig.draw(st)) })
			}
		}
	}
}

func TestJoinWords(t *testing.T) {
	eachJoin(t, func(t *testing.T, d *joinDrawing) {
		if n := len(texts(d.scene)); n < 14 {
			t.Fatalf("only %d texts on the figure", n)
		}
		report(t, touching(d.scene))
		report(t, beyondPage(d.scene))
		report(t, tooSmall(d.scene, d.style.MinLine, d.style.MinText))
		for _, x := range texts(d.scene) {
			ink := inkBox(x)
			for _, m := range paths(d.scene, "marker") {
				if covered(ink, m.Path) {
					t.Errorf("%s %q covers a symbol", x.Role, x.label())
				}
			}
			for _, m := range paths(d.scene, "boundary", "frame", "tie line", "leader") {
				for _, line := range m.Path.Flatten(0.02) {
					for i := 1; i < len(line); i++ {
						if ink.chord(segment{line[i-1], line[i]}) > 0 {
							t.Errorf("%s %q lies on a line: %s", x.Role, x.label(), m.Role)
						}
					}
				}
			}
		}
	})
}

// Every field with room for a word has its name, every horizontal line its temperature,
// and the key a line for every reaction.
func TestJoinIsNamed(t *testing.T) {
	eachJoin(t, func(t *testing.T, d *joinDrawing) {
		has, want := map[string]int{}, map[string]int{}
		for _, x := range texts(d.scene) {
			has[x.Role+" "+x.label()]++
			if x.Role == "key" && strings.Contains(x.label(), "→") {
				has["key"]++
			}
		}
		for i := range d.d.Fields {
			f := &d.d.Fields[i]
			r := d.outline(f)
			if len(r.rings) == 0 {
				continue
			}
			if _, radius := r.pole(0.1); 2*radius >= 4 {
				want["region "+assemblage(d.d.System, f.Phases)]++
			}
		}
		for i := range d.d.Levels {
			v := &d.d.Levels[i]
			if (v.To-v.From) > 0.3 && v.T > d.d.TMin {
				want[fmt.Sprintf("level %.0f °C", celsius(v.T))] = 1
			}
		}
		want["sample P"], want["tick label 0"], want["tick label 100"] = 1, 1, 1
		for name, n := range want {
			if has[name] < n {
				t.Errorf("%d of %q are wanted, %d are there", n, name, has[name])
			}
		}
		if len(d.d.Levels) > 0 && has["key"] == 0 {
			t.Error("no reaction in the key")
		}
	})
}

// Lines are drawn where the diagram has them: the eutectic of diopside and anorthite
// in wt%, measured on the page.
func TestJoinPlaces(t *testing.T) {
	var edge *joins.Diagram
	for _, f := range theJoins(t) {
		if f.name == "di-an-fo 0" {
			edge = f.d
		}
	}
	d := Join{Diagram: edge, WidthMM: DoubleColumn}.draw(ColourStyle())
	markers := paths(d.scene, "marker")
	if len(markers) != 1 || len(edge.Levels) != 1 {
		t.Fatalf("%d markers, %d levels", len(markers), len(edge.Levels))
	}
	lo, hi := markers[0].Path.Bounds()
	c := lo.lerp(hi, 0.5)
	share := 100 * (c.X - d.lo.X) / (d.hi.X - d.lo.X)
	T := celsius(edge.TMin) + (c.Y-d.lo.Y)/(d.hi.Y-d.lo.Y)*(edge.TMax-edge.TMin)
	if math.Abs(share-42) > 0.1 || math.Abs(T-1274) > 0.2 {
		t.Errorf("the eutectic is drawn at %.2f wt%% An and %.1f °C; the system is fitted to 42 wt%% and 1274 °C", share, T)
	}
}

func TestAxis(t *testing.T) {
	a := newAxis(1043.7, 1640.2, 9, "°C")
	var numbers []string
	for _, x := range a.ticks() {
		if x.number != "" {
			numbers = append(numbers, x.number)
		}
	}
	if got := strings.Join(numbers, " "); got != "1100 1200 1300 1400 1500 1600" {
		t.Errorf("numbers %s", got)
	}
	b := axis{from: 0, to: 100, step: 20}
	if n := len(b.ticks()); n != 11 || b.ticks()[0].number != "0" {
		t.Errorf("%d ticks, the first %q", n, b.ticks()[0].number)
	}
	for least, want := range map[float64]float64{0.3: 0.5, 1: 1, 1.01: 2, 37: 50, 66: 100} {
		if got := roundStep(least); math.Abs(got-want) > 1e-12 {
			t.Errorf("roundStep(%g) = %g, want %g", least, got, want)
		}
	}
}

func TestJoinRefusals(t *testing.T) {
	if _, err := (Join{}).Scene(); err == nil {
		t.Error("no error for a missing diagram")
	}
	if _, err := (Join{Diagram: theJoins(t)[0].d, WidthMM: 10}).Scene(); err == nil {
		t.Error("no error for 10 mm")
	}
}
