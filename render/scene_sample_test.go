package render

import (
	"fmt"
	"math"
)

// sampleScene is an invented figure of ordinary size (84 x 100 mm, about 100
// labels and 200 paths) that uses every kind of item the writers know.
func sampleScene() *Scene {
	s := NewScene(84, 100)
	s.Title = "Sample figure <A & B>"
	s.Description = "An invented triangle with labels (α and β) & curves."
	s.Subject = "Test of the writers"
	s.Keywords = "test, figure"
	s.Provenance = "made by a test from invented numbers"
	ink, tint, blue := Hex("1a1a1a"), Hex("cfe2f3"), Hex("#0072B2")
	tri := []Point{{7, 22}, {77, 22}, {42, 22 + 70*math.Sqrt(3)/2}}

	fields := s.Layer("fields")
	fields.Path(PathItem{Path: Polyline(tri, true), Fill: &tint, Role: "field"})
	iso := s.Layer("isotherms")
	for i := range 150 {
		var p Path
		y := 23 + float64(i)*0.35
		p.MoveTo(10+float64(i)*0.2, y)
		p.CubeTo(30, y+4, 50, y-4, 74-float64(i)*0.2, y)
		iso.Path(PathItem{Path: p, Stroke: &Stroke{Width: 0.18, Colour: Hex("767676")}, Role: "isotherm"})
	}
	marks := s.Layer("marks & points")
	for i := range 47 {
		x, y := 12+float64(i)*1.25, 30+10*math.Sin(float64(i)/4)
		var p Path
		p.MoveTo(x-0.7, y)
		p.LineTo(x+0.7, y-0.4)
		p.LineTo(x+0.7, y+0.4)
		p.Close()
		marks.Path(PathItem{Path: p, Fill: &blue, Stroke: &Stroke{Width: 0.1, Colour: ink, Round: true}, Role: "arrowhead"})
	}
	frame := s.Layer("frame")
	frame.Path(PathItem{Path: Polyline(tri, true), Stroke: &Stroke{Width: 0.35, Colour: ink}, Role: "frame"})
	frame.Path(PathItem{Path: Polyline([]Point{{20, 40}, {60, 50}, {64, 35}}, false),
		Stroke: &Stroke{Width: 0.4, Colour: Hex("D55E00"), Dash: []float64{2, 1}}, Role: "path"})
	frame.Path(PathItem{Path: Polyline([]Point{{20, 35}, {60, 45}, {64, 30}}, false),
		Stroke: &Stroke{Width: 0.6, Colour: blue, Dash: []float64{0.01, 1.2}, Round: true}, Role: "path"})

	words := s.Layer("labels")
	text := func(x, y, angle float64, runs []Run, label string) {
		words.Text(TextItem{Runs: runs, X: x, Y: y, Angle: angle, Colour: ink, Role: "label", Label: label})
	}
	text(30, 84, 0, FormulaRuns("CaAl2Si2O8", 9, Bold), "CaAl2Si2O8")
	text(3, 17, 0, FormulaRuns("3Al2O3.2SiO2", 8, Regular), "3Al2O3.2SiO2")
	text(55, 17, 0, FormulaRuns("(Mg,Fe)2SiO4 + L", 8, Regular), "(Mg,Fe)2SiO4 + L")
	text(20, 50, 60, FormulaRuns("α-Ca2SiO4 + β′", 8, Italic), "α-Ca2SiO4 + β′")
	text(62, 58, -60, PlainRuns("AVATAR Temperature 1100 °C", 8, Regular), "")
	text(30, 60, 0, PlainRuns("Åkermanite", 8, Italic), "")
	text(30, 56, 0, append(PlainRuns("T", 8, Italic), PlainRuns(" ≤ 1553 K, ΔT → 0.2 µm × π", 7, Regular)...), "")
	for i := range 93 {
		text(5+float64(i%6)*13, 1+float64(i/6), 0, PlainRuns(fmt.Sprintf("Key %d: 1%d00 °C", i, i%9), 2.4, Regular), "")
	}
	return s
}
