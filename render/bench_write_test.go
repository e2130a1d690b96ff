package render

import (
	"io"
	"testing"
)

func benchmarkWrite(b *testing.B, format string, o Options) {
	s := sampleScene()
	b.ReportAllocs()
	for b.Loop() {
		if err := s.Write(io.Discard, format, o); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkWritePDF(b *testing.B)         { benchmarkWrite(b, "pdf", Options{}) }
func BenchmarkWriteSVG(b *testing.B)         { benchmarkWrite(b, "svg", Options{}) }
func BenchmarkWriteSVGOutlines(b *testing.B) { benchmarkWrite(b, "svg", Options{OutlineText: true}) }
func BenchmarkWritePNG(b *testing.B)         { benchmarkWrite(b, "png", Options{}) }

// BenchmarkLoadFonts is the cost of the first text in a run of the program.
func BenchmarkLoadFonts(b *testing.B) {
	for b.Loop() {
		for i := range fontCount {
			f, err := loader(i, "x", "x", 400, fontData[i])()
			if err != nil || f == nil {
				b.Fatal(err)
			}
		}
	}
}

func BenchmarkTextWidth(b *testing.B) {
	runs := FormulaRuns("CaAl2Si2O8", 8, Regular)
	b.ReportAllocs()
	for b.Loop() {
		TextWidth(runs)
	}
}
