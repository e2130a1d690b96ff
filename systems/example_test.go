package systems_test

import (
	"fmt"

	"thalweg/systems"
)

func ExampleOpen() {
	f, err := systems.Open("lif-naf-kf")
	if err != nil {
		fmt.Println(err)
		return
	}
	sys, err := f.At(1e5, []string{"KF"}) // 1 bar, potassium fluoride withheld
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(f.Title, len(sys.Solids), sys.Withheld)
	for _, v := range f.Values() {
		if v.Where == "NaF, melting" {
			fmt.Println(v.Name, v.Value, v.Unit)
		}
	}
	// Output:
	// LiF–NaF–KF 2 [KF]
	// melting point 995.85 °C
	// heat of fusion 33.346 kJ/mol
	// heat capacity change on melting 4.06 J/(mol K)
}

func ExampleParse_problems() {
	_, err := systems.Parse("mine.toml", []byte(`title = "Mine"
pressure_GPa = 0.0001
temperature_K = [800, 1200]
`))
	fmt.Println(err)
	// Output:
	// mine.toml:1:1: component: there are 0 components; give exactly three [[component]] tables
	// mine.toml:1:1: solid: there are no solids; add a [[solid]] table for each
	// mine.toml:1:1: temperature_C: the range of temperature must be two numbers; add temperature_C = [lowest, highest]
	// mine.toml:3:1: temperature_K: this key is unknown; the unit is part of the key: convert the value and write temperature_C
}

func ExampleBuiltin_unknown() {
	_, err := systems.Builtin("di-an-f0")
	fmt.Println(err)
	// Output:
	// there is no built-in system "di-an-f0"; did you mean di-an-fo? Built-in are ab-or-silica, di-ab-an, di-an-fo, fo-an-silica, lif-naf-kf; a file of your own is given by its path, which ends in .toml
}
