package ternary_test

import (
	"fmt"

	"thalweg/ternary"
)

func ExampleParseFormula() {
	f, err := ternary.ParseFormula("3Al2O3.2SiO2")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s %.2f g/mol\n", f, f.MolarMass())
	for _, e := range f.Elements() {
		fmt.Println(e.Symbol, e.Count)
	}
	_, err = ternary.ParseFormula("CaMgSo2O6")
	fmt.Println(err)
	// Output:
	// 3Al2O3.2SiO2 426.05 g/mol
	// Al 6
	// O 13
	// Si 2
	// formula "CaMgSo2O6", column 5: "So" is not an element with a standard atomic weight
}

func ExampleComponents_Composition() {
	var cs ternary.Components
	for i, s := range []string{"LiF", "NaF", "KF"} {
		f, err := ternary.ParseFormula(s)
		if err != nil {
			fmt.Println(err)
			return
		}
		cs[i] = ternary.Component{Symbol: s, Formula: f}
	}
	x, err := cs.Composition([3]float64{29.1, 11.7, 59.2}, ternary.Mass) // wt%
	fmt.Printf("%.1f mol%% LiF, %v\n", 100*x[0], err)
	// Output:
	// 46.4 mol% LiF, <nil>
}
