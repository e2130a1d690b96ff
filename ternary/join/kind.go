package join

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"thalweg/ternary/gibbs"
)

// spectator is the share in a reaction, relative to the largest, below which a
// phase only looks on.
const spectator = 1e-7

// Reaction is what happens at a level on cooling.
type Reaction struct {
	High, Low []gibbs.State // what is used up, and what is made of it
	Kind      string        // eutectic, peritectic, …
}

// Reaction balances the phases of a level. The side of the higher entropy is that of
// the higher temperature.
func (l *Level) Reaction(sys *gibbs.System) Reaction {
	n := len(l.States)
	if n < 2 || n > 4 {
		return Reaction{Kind: "reaction"}
	}
	a := mat.NewDense(max(3, n), n, nil) // rows of nothing make V square
	var entropy [4]float64
	for j, s := range l.States {
		ph := sys.Liquid
		if s.Phase != gibbs.Liquid {
			ph = sys.Solids[s.Phase]
		}
		size := s.C[0] + s.C[1] + s.C[2]
		for i, c := range s.C {
			a.Set(i, j, c/size)
		}
		_, S, _ := ph.Gibbs(s.Y, l.T)
		entropy[j] = S / size
	}
	var svd mat.SVD
	if !svd.Factorize(a, mat.SVDFullV) {
		return Reaction{Kind: "reaction"}
	}
	var v mat.Dense
	svd.VTo(&v)
	turn, most := 0.0, 0.0
	for j := range l.States {
		turn += v.At(j, n-1) * entropy[j]
		most = math.Max(most, math.Abs(v.At(j, n-1)))
	}
	var r Reaction
	for j, s := range l.States {
		switch w := math.Copysign(1, turn) * v.At(j, n-1) / most; {
		case w > spectator:
			r.High = append(r.High, s)
		case w < -spectator:
			r.Low = append(r.Low, s)
		}
	}
	r.Kind = kindOf(r.High, r.Low)
	return r
}

// kindOf names a reaction by the numbers of its phases and of the liquids among
// them; terms of the trade.
func kindOf(high, low []gibbs.State) string {
	liquids := func(list []gibbs.State) (n int) {
		for _, s := range list {
			if s.Phase == gibbs.Liquid {
				n++
			}
		}
		return n
	}
	type shape struct{ high, highLiquids, low, lowLiquids int }
	switch (shape{len(high), liquids(high), len(low), liquids(low)}) {
	case shape{1, 1, 1, 0}:
		return "melting"
	case shape{1, 0, 1, 0}:
		return "transition"
	case shape{1, 1, 2, 0}:
		return "eutectic"
	case shape{1, 1, 2, 1}:
		return "monotectic"
	case shape{1, 0, 2, 0}:
		return "eutectoid"
	case shape{1, 0, 2, 1}:
		return "metatectic"
	case shape{2, 1, 1, 0}:
		return "peritectic"
	case shape{2, 2, 1, 0}:
		return "syntectic"
	case shape{2, 0, 1, 0}:
		return "peritectoid"
	case shape{1, 1, 3, 0}:
		return "ternary eutectic"
	case shape{1, 1, 3, 1}:
		return "ternary monotectic"
	case shape{1, 0, 3, 0}:
		return "ternary eutectoid"
	case shape{2, 1, 2, 0}, shape{3, 1, 1, 0}:
		return "ternary peritectic"
	}
	return "reaction"
}

// Role names a line: liquidus, solidus, solvus, liquid gap, level, vertical or, for
// any other, boundary.
func (l *Line) Role() string {
	melt := func(list []int) (liquids, solids int) {
		for _, p := range list {
			if p == gibbs.Liquid {
				liquids++
			} else {
				solids++
			}
		}
		return liquids, solids
	}
	aboveL, aboveS := melt(l.Above)
	belowL, belowS := melt(l.Below)
	switch {
	case l.Vertical:
		return "vertical"
	case l.Horizontal:
		return "level"
	case aboveL > 0 && aboveS == 0 && belowS > 0:
		return "liquidus"
	case aboveS == 0 && belowS == 0:
		return "liquid gap"
	case aboveL > 0 && belowL == 0:
		return "solidus"
	case aboveL == 0 && belowL == 0 && min(aboveS, belowS) == 1 && max(aboveS, belowS) == 2:
		return "solvus"
	}
	return "boundary"
}

// Change says which phases a line brings on cooling, and which it takes; of a
// vertical line, from left to right.
func (l *Line) Change() (comes, goes []int) {
	return missing(l.Below, l.Above), missing(l.Above, l.Below)
}

// missing are the phases of a that b lacks, or has fewer times.
func missing(a, b []int) (out []int) {
	rest := slices.Clone(b)
	for _, p := range a {
		if i := slices.Index(rest, p); i >= 0 {
			rest = slices.Delete(rest, i, i+1)
			continue
		}
		out = append(out, p)
	}
	return out
}
