package descent

import (
	"math"
	"strings"

	"thalweg/ternary/tangent"
)

// dependTol is the share of their size by which compositions may miss a linear
// dependence that counts as exact.
const dependTol = 1e-11

// noPart is the coefficient, relative to the largest, at which a phase takes no
// part in a reaction.
const noPart = 1e-13

// nullReaction looks for the one reaction among the parts at T: amounts v with
// Σ v·c = 0, turned so that it releases heat on cooling and takes it up on
// heating, and scaled to max |v| = 1. dependent is false when the compositions are independent.
func (w *walk) nullReaction(parts []tangent.Part, T float64) (v []float64, dependent bool) {
	v, dependent = w.reactionAmong(parts)
	if dependent {
		v = w.turn(parts, v, T)
	}
	return v, dependent
}

// reactionAmong is nullReaction without direction or scale.
func (w *walk) reactionAmong(parts []tangent.Part) (v []float64, dependent bool) {
	n := len(parts)
	// Gauss–Jordan on the 3×n matrix of compositions, with full pivoting.
	a := make([][3]float64, n)
	for j := range parts {
		a[j] = parts[j].State.C
	}
	pivotCol := [3]int{-1, -1, -1}
	usedRow := [3]bool{}
	isPivot := make([]bool, n)
	rank := 0
	for ; rank < 3; rank++ {
		row, col, big := -1, -1, dependTol
		for j := 0; j < n; j++ {
			for r := 0; r < 3; r++ {
				if !isPivot[j] && !usedRow[r] && math.Abs(a[j][r]) > big {
					row, col, big = r, j, math.Abs(a[j][r])
				}
			}
		}
		if col < 0 {
			break
		}
		usedRow[row], isPivot[col], pivotCol[row] = true, true, col
		p := a[col][row]
		for j := 0; j < n; j++ {
			a[j][row] /= p
		}
		for r := 0; r < 3; r++ {
			if r == row {
				continue
			}
			f := a[col][r]
			for j := 0; j < n; j++ {
				a[j][r] -= f * a[j][row]
			}
		}
	}
	if rank == n {
		return nil, false
	}
	v = make([]float64, n)
	free := -1
	for j := n - 1; j >= 0; j-- {
		if !isPivot[j] {
			free = j
		}
	}
	v[free] = 1
	for r, c := range pivotCol {
		if c >= 0 {
			v[c] = -a[free][r]
		}
	}
	return v, true
}

// turn gives a reaction the direction in which it runs, and unit size.
func (w *walk) turn(parts []tangent.Part, v []float64, T float64) []float64 {
	entropy, size := 0.0, 0.0
	for _, c := range v {
		size = math.Max(size, math.Abs(c))
	}
	for j, p := range parts {
		if math.Abs(v[j]) < noPart*size {
			v[j] = 0
		}
		_, s, _ := w.phase(p.State.Phase).Gibbs(p.State.Y, T)
		entropy += v[j] * s
	}
	if entropy*w.dir < 0 {
		size = -size
	}
	for j := range v {
		v[j] /= size
	}
	return v
}

// describe writes a reaction: "L + Fo → En".
func (w *walk) describe(parts []tangent.Part, v []float64) string {
	var left, right []string
	for j, p := range parts {
		switch {
		case v[j] < 0:
			left = append(left, w.symbol(p.State.Phase))
		case v[j] > 0:
			right = append(right, w.symbol(p.State.Phase))
		}
	}
	return strings.Join(left, " + ") + " → " + strings.Join(right, " + ")
}
