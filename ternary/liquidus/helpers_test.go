package liquidus_test

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// subject is a system that the detailed tests look at.
type subject struct {
	name string
	sys  *gibbs.System
}

// detailedSeeds are random systems looked at in detail: among them are every
// extension, ternary terms, binary and ternary solid solutions, two forms of one
// substance and compounds inside the triangle (TestSubjectsVary).
var detailedSeeds = []int64{3, 6, 8, 14, 25, 49}

// subjects are the built-in systems, the hand-made cases whose edges are
// binary systems and the detailed seeds.
func subjects(t testing.TB) []subject {
	t.Helper()
	var out []subject
	for _, name := range systems.Names() {
		out = append(out, subject{name, trial.Builtin(t, name)})
	}
	for _, name := range []string{"island", "polymorphs", "ring", "join", "hugging"} {
		out = append(out, subject{name, trial.CaseNamed(name)})
	}
	for _, seed := range detailedSeeds {
		out = append(out, subject{fmt.Sprintf("seed %d", seed), trial.System(seed, trial.Options{})})
	}
	return out
}

// oneLiquid are the subjects without two liquids, for tests whose own reckoning knows
// of one; those with two have tests of their own.
func oneLiquid(t testing.TB) (out []subject) {
	for _, s := range subjects(t) {
		split := false
		for _, f := range whole(t, s.sys, liquidus.Options{}).Fields {
			split = split || f.TwoLiquids
		}
		if !split {
			out = append(out, s)
		}
	}
	return out
}

// whole computes a projection that must pass its own checks.
func whole(t testing.TB, sys *gibbs.System, o liquidus.Options) *liquidus.Projection {
	t.Helper()
	p, err := liquidus.Compute(sys, o)
	if err != nil {
		t.Fatal(err)
	}
	if !p.Checks.Passed {
		t.Fatalf("%s: %v", sys.Name, p.Checks.Problems)
	}
	return p
}

func surface(t testing.TB, sys *gibbs.System) *liquidus.Surface {
	t.Helper()
	s, err := liquidus.NewSurface(sys)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// sample draws compositions: nine in ten uniformly over the triangle, the rest on
// its sides.
func sample(seed int64, n int) []ternary.Composition {
	rng := rand.New(rand.NewSource(seed))
	out := make([]ternary.Composition, n)
	for i := range out {
		var a [3]float64
		for k := range a {
			a[k] = rng.ExpFloat64()
		}
		if i%10 == 9 {
			a[rng.Intn(3)] = 0
		}
		out[i], _ = ternary.Normalize(a)
	}
	return out
}

// lattice returns the nodes of a triangular lattice, the sides included.
func lattice(n int) []ternary.Composition {
	var out []ternary.Composition
	for i := 0; i <= n; i++ {
		for j := 0; i+j <= n; j++ {
			out = append(out, ternary.Composition{float64(i) / float64(n), float64(j) / float64(n), float64(n-i-j) / float64(n)})
		}
	}
	return out
}

// spread returns n temperatures between the lowest node and the highest apex.
func spread(p *liquidus.Projection, n int) []float64 {
	lo, hi := math.Inf(1), 0.0
	for i := range p.Nodes {
		lo = math.Min(lo, p.Nodes[i].T)
	}
	for i := range p.Apexes {
		if T := p.Apexes[i].T; !math.IsInf(T, 0) {
			lo, hi = math.Min(lo, T), math.Max(hi, T)
		}
	}
	out := make([]float64, n)
	for k := range out {
		out[k] = lo + (hi-lo)*(float64(k)+0.37)/float64(n)
	}
	return out
}

// toSegment is the distance of x from the segment ab in the triangle of side 1.
func toSegment(x, a, b ternary.Composition) float64 {
	px, py := x.XY()
	ax, ay := a.XY()
	bx, by := b.XY()
	dx, dy := bx-ax, by-ay
	u := 0.0
	if h := dx*dx + dy*dy; h > 0 {
		u = math.Max(0, math.Min(1, ((px-ax)*dx+(py-ay)*dy)/h))
	}
	return math.Hypot(px-ax-u*dx, py-ay-u*dy)
}

// toLine is the distance of x from a polyline.
func toLine(x ternary.Composition, line []ternary.Composition, closed bool) float64 {
	best := math.Inf(1)
	for i := range line {
		if i > 0 {
			best = math.Min(best, toSegment(x, line[i-1], line[i]))
		} else if closed {
			best = math.Min(best, toSegment(x, line[len(line)-1], line[0]))
		}
	}
	return best
}

// winding is the number of times a ring goes round x, from the sum of the angles
// under which x sees its sides.
func winding(x ternary.Composition, ring []ternary.Composition) int {
	px, py := x.XY()
	sum := 0.0
	for i := range ring {
		ax, ay := ring[i].XY()
		bx, by := ring[(i+1)%len(ring)].XY()
		ax, ay, bx, by = ax-px, ay-py, bx-px, by-py
		sum += math.Atan2(ax*by-ay*bx, ax*bx+ay*by)
	}
	return int(math.Round(sum / (2 * math.Pi)))
}

// holds reports whether x lies in a field.
func holds(f *liquidus.Field, x ternary.Composition) bool {
	if winding(x, f.Outline) == 0 {
		return false
	}
	for _, h := range f.Holes {
		if winding(x, h) != 0 {
			return false
		}
	}
	return true
}

// toOutline is the distance of x from the sides of a field.
func toOutline(f *liquidus.Field, x ternary.Composition) float64 {
	d := toLine(x, f.Outline, true)
	for _, h := range f.Holes {
		d = math.Min(d, toLine(x, h, true))
	}
	return d
}
