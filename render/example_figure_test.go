package render_test

import (
	"fmt"

	"thalweg/render"
	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/liquidus"
)

// A liquidus projection for one column of a journal, in ink. Scene.WriteFile
// would write it.
func ExampleFigure() {
	file, err := systems.Builtin("lif-naf-kf")
	if err != nil {
		fmt.Println(err)
		return
	}
	sys, err := file.AtReference(nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	p, err := liquidus.Compute(sys, liquidus.Options{Isotherms: []float64{900, 1000, 1100}})
	if err != nil {
		fmt.Println(err)
		return
	}
	f := render.Figure{Projection: p, Basis: ternary.Mole, Style: render.InkStyle(), WidthMM: render.SingleColumn}
	scene, err := f.Scene()
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.0f mm wide\n", scene.Width)
	for _, l := range scene.Layers {
		if len(l.Items) > 0 {
			fmt.Println(l.Name)
		}
	}
	// Output:
	// 84 mm wide
	// isotherms
	// frame
	// boundaries
	// arrowheads
	// points
	// labels
	// key
}
