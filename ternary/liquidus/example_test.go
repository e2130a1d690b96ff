package liquidus_test

import (
	"fmt"

	"thalweg/ternary"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

// Three solids and an ideal liquid: one ternary eutectic, below the three of the
// edges.
func ExampleCompute() {
	sys := trial.Ideal([3]float64{900, 1000, 1100}, [3]float64{18000, 20000, 22000}) // K, J/mol
	p, err := liquidus.Compute(sys, liquidus.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, n := range p.Nodes {
		fmt.Printf("%s %s %.1f K, x = %.3f\n", n.ID, n.Kind, n.T, n.Liquid)
	}
	fmt.Println("whole:", p.Checks.Passed)
	// Output:
	// E1 eutectic 678.4 K, x = [0.456 0.320 0.224]
	// e1 eutectic 812.3 K, x = [0.000 0.573 0.427]
	// e2 eutectic 764.3 K, x = [0.652 0.000 0.348]
	// e3 eutectic 734.3 K, x = [0.581 0.419 0.000]
	// whole: true
}

// A compound that melts congruently splits a system in two: along its boundary
// with C the temperature has a maximum on the join.
func ExampleCompute_compound() {
	p, err := liquidus.Compute(trial.CaseNamed("join"), liquidus.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, c := range p.Curves {
		if p.Nodes[c.From].Kind == liquidus.Maximum {
			a, b := p.System.Solids[c.Solids[0]].Symbol, p.System.Solids[c.Solids[1]].Symbol
			fmt.Printf("%s + %s: %s from %.1f K down to %s at %.1f K\n", a, b,
				c.Points[0].Kind, p.Nodes[c.From].T, p.Nodes[c.To].Kind, p.Nodes[c.To].T)
		}
	}
	// Output:
	// C + K: cotectic from 1031.6 K down to eutectic at 972.4 K
	// C + K: cotectic from 1031.6 K down to eutectic at 972.4 K
}

// What a single liquid does on cooling, without the whole projection.
func ExampleSurface_Liquidus() {
	s, err := liquidus.NewSurface(trial.CaseNamed("polymorphs"))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, x := range []ternary.Composition{{0.7, 0.2, 0.1}, {0.5, 0.3, 0.2}} {
		T, solid := s.Liquidus(x)
		fmt.Printf("%.1f: %.1f K, solid %d\n", x, T, solid.Phase)
	}
	// Output:
	// [0.7 0.2 0.1]: 1306.3 K, solid 0
	// [0.5 0.3 0.2]: 1177.9 K, solid 3
}
