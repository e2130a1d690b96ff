package descent_test

import (
	"fmt"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/descent"
)

// What an invented melt of 30 wt% diopside, 35 albite and 35 anorthite does when
// its crystals are taken away.
func ExampleFollow() {
	f, err := systems.Builtin("di-ab-an")
	if err != nil {
		fmt.Println(err)
		return
	}
	sys, err := f.AtReference(nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	x, err := sys.Components.Composition([3]float64{30, 35, 35}, ternary.Mass)
	if err != nil {
		fmt.Println(err)
		return
	}
	p, err := descent.Follow(sys, x, descent.Options{Mode: descent.Fractional})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, s := range p.Steps {
		if s.Event != "" {
			fmt.Printf("%.1f °C: %s\n", s.T-ternary.ZeroCelsius, s.Event)
		}
	}
	fmt.Println(p.Checks.Passed)
	// Output:
	// 1326.7 °C: Pl in
	// 1233.5 °C: Di in
	// 1089.0 °C: the rest crystallises without change
	// 1089.0 °C: L out
	// true
}
