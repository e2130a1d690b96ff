package ternary

import (
	"fmt"
	"math"
)

// Composition is a point of the triangle: mole fractions of components 0, 1
// and 2. Properties that hold for every Composition the program passes around:
//
//  1. x[0]+x[1]+x[2] = 1 to rounding;
//  2. a liquid's composition has x[i] ≥ 0; a solid's may have a negative
//     entry when the solid lies in the plane but outside the triangle.
type Composition [3]float64

// Normalize returns the composition with the same ratios and Σx = 1. It
// reports an error when an entry is not finite or the sum is not positive.
func Normalize(amounts [3]float64) (Composition, error) {
	sum := amounts[0] + amounts[1] + amounts[2]
	if math.IsNaN(sum) || math.IsInf(sum, 0) {
		return Composition{}, fmt.Errorf("composition has an entry that is not a finite number: %v", amounts)
	}
	if sum <= 0 {
		return Composition{}, fmt.Errorf("components sum to %g, so there is nothing to normalise", sum)
	}
	return Composition{amounts[0] / sum, amounts[1] / sum, amounts[2] / sum}, nil
}

// Inside reports whether all entries are at least -tol.
func (x Composition) Inside(tol float64) bool {
	return x[0] >= -tol && x[1] >= -tol && x[2] >= -tol
}

// Distance is the Euclidean distance between two points of the triangle drawn
// with sides of length 1.
func (x Composition) Distance(y Composition) float64 {
	ax, ay := x.XY()
	bx, by := y.XY()
	return math.Hypot(ax-bx, ay-by)
}

// XY places the composition in the plane: an equilateral triangle of side 1
// with component 1 at (0, 0), component 2 at (1, 0) and component 0 on top.
func (x Composition) XY() (px, py float64) {
	return x[2] + x[0]/2, x[0] * math.Sqrt(3) / 2
}

// Lerp is the point (1-t)·x + t·y.
func (x Composition) Lerp(y Composition, t float64) Composition {
	return Composition{x[0] + t*(y[0]-x[0]), x[1] + t*(y[1]-x[1]), x[2] + t*(y[2]-x[2])}
}

// Apex is the composition of pure component i.
func Apex(i int) Composition {
	var x Composition
	x[i] = 1
	return x
}
