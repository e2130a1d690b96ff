package tangent_test

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize/convex/lp"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// The reference: the same minimisation as a linear programme over phases at the
// compositions of a mesh, nothing but values of Phase.Gibbs. The mesh is refined
// around the solution by further columns.
//
// It comes with bounds that need no estimate of curvature. Let the exact
// assemblage have amounts n_φ, compositions y_φ and the plane μ.
//
//  1. G_LP ≥ G_exact, since every solution of the programme is an assemblage.
//  2. G_LP − G_exact ≤ E = Σ n_φ (Σ_k w_k G(v_k) − G(y_φ)), since the exact
//     phases can be replaced by mixtures of the corners v_k of their cells with
//     barycentric weights w_k.
//  3. For any solution with columns j, G_LP − G_exact = Σ n_j s_j with
//     s_j = g_j − μ·c_j ≥ 0. So a phase that is absent from the exact assemblage, and lies s
//     above the plane, has an amount of at most E/s.
//  4. With K = max over a phase's columns of |c_j − c_φ|²/s_j the columns that
//     stand for a phase miss its contents by |Σ n_j (c_j − c_φ)| ≤ √(N·K·E), N
//     their amount. Mass balance carries both errors into the amounts, enlarged at
//     most by the inverse of the smallest singular value of the matrix of contents.

const (
	meshLiquid = 24 // intervals per side of the first mesh, three end-members
	meshBinary = 60 // the same for two
	meshFiner  = 8  // intervals into which a refinement divides one
	meshReach  = 12 // fine intervals around a point of the solution
	meshLevels = 2
)

// column is one phase at one composition.
type column struct {
	phase, level int
	y, c         [3]float64
	g            float64 // J/mol
}

// key names a node of a phase's mesh of one level.
type key struct{ phase, level, i, j int }

// programme is a set of columns.
type programme struct {
	sys  *gibbs.System
	T    float64
	cols []column
	seen map[key]int
}

func (p *programme) phase(i int) *gibbs.Phase {
	if i == gibbs.Liquid {
		return p.sys.Liquid
	}
	return p.sys.Solids[i]
}

// intervals is the number of intervals per side of a phase's mesh at a level.
func (p *programme) intervals(phase, level int) int {
	n := meshLiquid
	if len(p.phase(phase).Members) == 2 {
		n = meshBinary
	}
	for ; level > 0; level-- {
		n *= meshFiner
	}
	return n
}

// add enters the node (i, j) of a mesh, if it is one and new.
func (p *programme) add(k key) {
	ph := p.phase(k.phase)
	n := p.intervals(k.phase, k.level)
	rest := n - k.i - k.j
	if k.i < 0 || k.j < 0 || rest < 0 {
		return
	}
	if _, ok := p.seen[k]; ok {
		return
	}
	col := column{phase: k.phase, level: k.level}
	switch len(ph.Members) {
	case 1:
		col.y[0] = 1
	case 2:
		if k.j != 0 {
			return
		}
		col.y = [3]float64{float64(k.i) / float64(n), float64(rest) / float64(n)}
	default:
		col.y = [3]float64{float64(k.i) / float64(n), float64(k.j) / float64(n), float64(rest) / float64(n)}
	}
	for m := range ph.Members {
		for c := range col.c {
			col.c[c] += col.y[m] * ph.Members[m].C[c]
		}
	}
	col.g, _, _ = ph.Gibbs(col.y, p.T)
	p.seen[k] = len(p.cols)
	p.cols = append(p.cols, col)
}

// newProgramme has the first mesh of every phase.
func newProgramme(sys *gibbs.System, T float64) *programme {
	p := &programme{sys: sys, T: T, seen: map[key]int{}}
	for ph := gibbs.Liquid; ph < len(sys.Solids); ph++ {
		n := p.intervals(ph, 0)
		switch len(p.phase(ph).Members) {
		case 1:
			p.add(key{ph, 0, 0, 0})
		case 2:
			for i := 0; i <= n; i++ {
				p.add(key{ph, 0, i, 0})
			}
		default:
			for i := 0; i <= n; i++ {
				for j := 0; i+j <= n; j++ {
					p.add(key{ph, 0, i, j})
				}
			}
		}
	}
	return p
}

// refine adds the finer mesh around every column of a solution.
func (p *programme) refine(amount []float64, level int) {
	for k, n := range amount {
		col := p.cols[k]
		ph := p.phase(col.phase)
		if n <= 0 || len(ph.Members) == 1 {
			continue
		}
		m := float64(p.intervals(col.phase, level))
		i, j := int(math.Round(col.y[0]*m)), int(math.Round(col.y[1]*m))
		for a := -meshReach; a <= meshReach; a++ {
			if len(ph.Members) == 2 {
				p.add(key{col.phase, level, i + a, 0})
				continue
			}
			for b := -meshReach; b <= meshReach; b++ {
				p.add(key{col.phase, level, i + a, j + b})
			}
		}
	}
}

// solve minimises Σ n_j g_j with Σ n_j c_j = b, from the pure liquids.
func (p *programme) solve(b ternary.Composition) (amount []float64, err error) {
	n := len(p.cols)
	rt := ternary.R * p.T
	cost := make([]float64, n)
	a := mat.NewDense(3, n, nil)
	var start []int
	for k, col := range p.cols {
		cost[k] = col.g / rt
		for i := range col.c {
			a.Set(i, k, col.c[i])
		}
		if col.phase == gibbs.Liquid && col.level == 0 && (col.y[0] == 1 || col.y[1] == 1 || col.y[2] == 1) {
			start = append(start, k)
		}
	}
	_, amount, err = lp.Simplex(cost, a, b[:], 1e-11, start)
	return amount, err
}

// minimise solves with refinement.
func minimise(sys *gibbs.System, b ternary.Composition, T float64) (*programme, []float64, error) {
	p := newProgramme(sys, T)
	for level := 0; ; level++ {
		amount, err := p.solve(b)
		if err != nil || level == meshLevels {
			return p, amount, err
		}
		p.refine(amount, level+1)
	}
}

// interpolated is how far the mesh's own interpolation of G lies above G at y:
// by the finest cell around y whose corners are all columns. The sum of the
// weights w_k G(v_k) − G(y), J/mol.
func (p *programme) interpolated(phase int, y [3]float64) float64 {
	ph := p.phase(phase)
	g, _, _ := ph.Gibbs(y, p.T)
	if len(ph.Members) == 1 {
		return 0
	}
	for level := meshLevels; level >= 0; level-- {
		n := float64(p.intervals(phase, level))
		i, j := math.Floor(y[0]*n), math.Floor(y[1]*n)
		u, v := y[0]*n-i, y[1]*n-j
		corners := map[[2]int]float64{}
		put := func(di, dj int, w float64) {
			if w > 0 {
				corners[[2]int{int(i) + di, int(j) + dj}] += w
			}
		}
		switch {
		case len(ph.Members) == 2:
			j = 0
			put(0, 0, 1-u)
			put(1, 0, u)
		case u+v <= 1:
			put(0, 0, 1-u-v)
			put(1, 0, u)
			put(0, 1, v)
		default:
			put(1, 1, u+v-1)
			put(1, 0, 1-v)
			put(0, 1, 1-u)
		}
		sum, whole := 0.0, true
		for at, w := range corners {
			k, ok := p.seen[key{phase, level, at[0], at[1]}]
			if !ok {
				whole = false
				break
			}
			sum += w * p.cols[k].g
		}
		if whole {
			return sum - g
		}
	}
	return math.Inf(1)
}
