package systems

import (
	"fmt"
	"math/big"
	"sort"
	"strconv"
	"strings"

	"thalweg/ternary"
)

// balance writes a formula as a combination of the three component formulas by
// balancing every element, in exact rational arithmetic on the counts as
// written. Coefficients may be negative: a solid may lie in the plane but outside
// the triangle. It reports an error, fit for a Problem's reason, when there is no
// such combination or more than one.
func balance(f ternary.Formula, cs ternary.Components) ([3]float64, error) {
	elements := elementsOf(f, cs[0].Formula, cs[1].Formula, cs[2].Formula)
	rows := make([][4]*big.Rat, len(elements))
	for i, e := range elements {
		for j := range cs {
			rows[i][j] = rational(cs[j].Formula.Count(e))
		}
		rows[i][3] = rational(f.Count(e))
	}
	if rank := eliminate(rows); rank < 3 {
		return [3]float64{}, fmt.Errorf("%s cannot be balanced, because the component formulas are multiples or sums of one another", f)
	}
	for i := 3; i < len(rows); i++ {
		if rows[i][3].Sign() != 0 {
			return [3]float64{}, fmt.Errorf("%s is not a combination of %s", f, formulaList(cs))
		}
	}
	var c [3]float64
	for j := range c {
		c[j], _ = rows[j][3].Float64()
	}
	return c, nil
}

// eliminate brings the rows into reduced echelon form over the first three
// columns (Gauss–Jordan) and returns their rank.
func eliminate(rows [][4]*big.Rat) int {
	rank := 0
	for col := 0; col < 3; col++ {
		pivot := rank
		for pivot < len(rows) && rows[pivot][col].Sign() == 0 {
			pivot++
		}
		if pivot == len(rows) {
			continue
		}
		rows[rank], rows[pivot] = rows[pivot], rows[rank]
		inverse := new(big.Rat).Inv(rows[rank][col])
		for k := range rows[rank] {
			rows[rank][k].Mul(rows[rank][k], inverse)
		}
		for i := range rows {
			if i == rank || rows[i][col].Sign() == 0 {
				continue
			}
			factor := new(big.Rat).Set(rows[i][col])
			for k := range rows[i] {
				rows[i][k].Sub(rows[i][k], new(big.Rat).Mul(factor, rows[rank][k]))
			}
		}
		rank++
	}
	return rank
}

// rational is the decimal that a count was written as: twelve digits undo the
// rounding of a product such as 3 × 0.1.
func rational(v float64) *big.Rat {
	q, _ := new(big.Rat).SetString(strconv.FormatFloat(v, 'g', 12, 64))
	return q
}

// compositionTol is the error allowed in an explicit composition, in atoms of
// any element per formula unit: the last digit of fractions written to four.
const compositionTol = 1e-3

// checkComposition reports an error when c moles of the components do not have
// the formula's atoms.
func checkComposition(f ternary.Formula, c [3]float64, cs ternary.Components) error {
	for _, e := range elementsOf(f, cs[0].Formula, cs[1].Formula, cs[2].Formula) {
		sum := 0.0
		for j := range cs {
			sum += c[j] * cs[j].Formula.Count(e)
		}
		if d := sum - f.Count(e); d > compositionTol || d < -compositionTol {
			return fmt.Errorf("it makes %.6g %s per formula unit, but %s has %.6g", sum, e, f, f.Count(e))
		}
	}
	return nil
}

func elementsOf(fs ...ternary.Formula) []string {
	seen := map[string]bool{}
	for _, f := range fs {
		for _, e := range f.Elements() {
			seen[e.Symbol] = true
		}
	}
	out := make([]string, 0, len(seen))
	for e := range seen {
		out = append(out, e)
	}
	sort.Strings(out)
	return out
}

func formulaList(cs ternary.Components) string {
	return strings.Join([]string{cs[0].Formula.String(), cs[1].Formula.String(), cs[2].Formula.String()}, ", ")
}
