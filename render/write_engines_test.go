package render

import (
	"bytes"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// tool runs an installed program, or skips the test without it.
func tool(t *testing.T, name string, args ...string) (stdout, stderr string) {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		t.Skipf("%s is not installed", name)
	}
	cmd := exec.Command(path, args...)
	var out, e bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &e
	if err := cmd.Run(); err != nil {
		t.Fatalf("%s: %v\n%s", name, err, e.String())
	}
	return out.String(), e.String()
}

func writeSample(t *testing.T, name string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := sampleScene().WriteFile(path, Options{}); err != nil {
		t.Fatal(err)
	}
	return path
}

func TestPDFOpensInPoppler(t *testing.T) {
	path := writeSample(t, "a.pdf")
	if _, msg := tool(t, "pdftocairo", "-svg", path, path+".svg"); msg != "" {
		t.Errorf("pdftocairo says %s", msg)
	}
}

func TestPDFOpensInMuPDF(t *testing.T) {
	path := writeSample(t, "a.pdf")
	_, msg := tool(t, "mutool", "draw", "-q", "-r", "50", "-o", path+".png", path)
	for line := range strings.Lines(msg) {
		if !strings.Contains(line, "ICC support is not available") { // of that build, not of the file
			t.Errorf("mutool says %s", line)
		}
	}
}

func TestPDFTextIsFoundByPoppler(t *testing.T) {
	path := writeSample(t, "a.pdf")
	for _, mode := range []string{"-raw", "-layout"} {
		out, _ := tool(t, "pdftotext", "-enc", "UTF-8", mode, path, "-")
		for _, want := range []string{"CaAl2Si2O8", "3Al2O3·2SiO2", "(Mg,Fe)2SiO4 + L", "α-Ca2SiO4 + β′",
			"AVATAR Temperature 1100 °C", "Åkermanite", "T ≤ 1553 K, ΔT → 0.2 µm × π", "Key 92: 1200 °C"} {
			if !strings.Contains(out, want) {
				t.Errorf("pdftotext %s does not find %q", mode, want)
			}
		}
	}
}

// Other engines painting the PDF must give nearly the picture of the png
// writer: same geometry, same colours, only edges shaded differently. A shift
// of one pixel makes more than 2 % of the pixels differ.
func TestPNGAgreesWithPaintedPDF(t *testing.T) {
	engines := []struct {
		name  string
		limit float64 // part of the pixels that may differ
		args  func(pdf, png string) []string
	}{
		{"mutool", 0.003, func(pdf, png string) []string { return []string{"draw", "-q", "-r", "150", "-o", png, pdf} }},
		// poppler moves thin lines to whole pixels
		{"pdftoppm", 0.015, func(pdf, png string) []string {
			return []string{"-png", "-r", "150", "-singlefile", pdf, strings.TrimSuffix(png, ".png")}
		}},
	}
	for _, e := range engines {
		t.Run(e.name, func(t *testing.T) {
			path := writeSample(t, "a.pdf")
			tool(t, e.name, e.args(path, path+".png")...)
			if part := differing(t, path+".png"); part > e.limit {
				t.Errorf("%.2f %% of the pixels differ, limit %.2f %%", 100*part, 100*e.limit)
			} else {
				t.Logf("%.3f %% of the pixels differ", 100*part)
			}
		})
	}
}

// differing returns the part of the sample's pixels at 150 dpi that are more
// than 35 % away from those of the picture in the named file.
func differing(t *testing.T, name string) float64 {
	t.Helper()
	b, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	other := decodePNG(t, b)
	ours, _, err := sampleScene().raster(150)
	if err != nil {
		t.Fatal(err)
	}
	size := ours.Bounds().Size()
	if d := size.Sub(other.Bounds().Size()); d.X*d.X > 1 || d.Y*d.Y > 1 {
		t.Fatalf("picture of %v, painted PDF %v", size, other.Bounds().Size())
	}
	far := 0
	for y := range size.Y - 1 {
		for x := range size.X - 1 {
			r1, g1, b1, _ := ours.At(x, y).RGBA()
			r2, g2, b2, _ := other.At(x, y).RGBA()
			d := math.Abs(float64(r1)-float64(r2)) + math.Abs(float64(g1)-float64(g2)) + math.Abs(float64(b1)-float64(b2))
			if d > 0.35*3*65535 {
				far++
			}
		}
	}
	return float64(far) / float64(size.X*size.Y)
}
