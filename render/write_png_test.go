package render

import (
	"bytes"
	"image"
	"image/color"
	"image/png"
	"math"
	"strings"
	"testing"
)

func decodePNG(t *testing.T, b []byte) image.Image {
	t.Helper()
	img, err := png.Decode(bytes.NewReader(b)) // checks every chunk's checksum up to the picture
	if err != nil {
		t.Fatal(err)
	}
	return img
}

func TestPNGSizeAndMetadata(t *testing.T) {
	for _, c := range []struct{ dpi, w, h, perMetre int }{
		{0, 992, 1181, 11811}, {600, 1984, 2362, 23622}, {100, 331, 394, 3937},
	} {
		b := mustWrite(t, sampleScene(), "png", Options{DPI: c.dpi, Producer: "test"})
		if got := decodePNG(t, b).Bounds().Size(); got != image.Pt(c.w, c.h) {
			t.Errorf("%d dpi: %v pixels, want %d x %d", c.dpi, got, c.w, c.h)
		}
		at := bytes.Index(b, []byte("pHYs"))
		if at < 0 || at > bytes.Index(b, []byte("IDAT")) {
			t.Fatalf("%d dpi: no pHYs before the picture", c.dpi)
		}
		if x, y, unit := be.Uint32(b[at+4:]), be.Uint32(b[at+8:]), b[at+12]; int(x) != c.perMetre || x != y || unit != 1 {
			t.Errorf("%d dpi: pHYs %d %d %d", c.dpi, x, y, unit)
		}
		if !bytes.Contains(b, []byte("iTXtTitle\x00\x00\x00\x00\x00Sample figure <A & B>")) {
			t.Errorf("%d dpi: no title", c.dpi)
		}
	}
}

// Shapes of known size must cover known pixels in their exact colours.
func TestPNGPaintsToScale(t *testing.T) {
	s := NewScene(25.4, 25.4) // 100 x 100 pixels at 100 dpi: 0.254 mm each
	fill, line := Hex("0072B2"), Hex("D55E00")
	mm := func(px float64) float64 { return px * 0.254 }
	square := Polyline([]Point{{mm(10), mm(10)}, {mm(40), mm(10)}, {mm(40), mm(40)}, {mm(10), mm(40)}}, true)
	s.Layer("a").Path(PathItem{Path: square, Fill: &fill})
	s.Layer("a").Path(PathItem{Path: Polyline([]Point{{mm(10), mm(60)}, {mm(90), mm(60)}}, false),
		Stroke: &Stroke{Width: mm(4), Colour: line, Dash: []float64{mm(20), mm(10)}}})
	img := decodePNG(t, mustWrite(t, s, "png", Options{DPI: 100}))
	white := Colour{255, 255, 255}
	cases := []struct {
		name string
		x, y int // pixels from the top left
		want Colour
	}{
		{"corner", 0, 0, white}, {"far corner", 99, 99, white},
		{"square's middle", 25, 75, fill}, {"its lower left", 10, 89, fill}, {"its upper right", 39, 60, fill},
		{"left of it", 9, 75, white}, {"below it", 25, 90, white}, {"above it", 25, 59, white},
		{"first dash", 15, 40, line}, {"its last pixel", 29, 40, line}, {"gap", 30, 40, white}, {"second dash", 40, 40, line},
		{"top of the line", 15, 38, line}, {"bottom", 15, 41, line}, {"above the line", 15, 37, white}, {"below the line", 15, 42, white},
	}
	for _, c := range cases {
		got := color.RGBAModel.Convert(img.At(c.x, c.y)).(color.RGBA)
		for _, d := range []float64{float64(got.R) - float64(c.want.R), float64(got.G) - float64(c.want.G), float64(got.B) - float64(c.want.B)} {
			if math.Abs(d) > 2 {
				t.Errorf("%s: colour %v, want %v", c.name, got, c.want)
				break
			}
		}
	}
}

func TestPNGResolutionLimits(t *testing.T) {
	for _, dpi := range []int{-1, 5000, 4800} {
		s := NewScene(190, 240)
		if err := s.Write(&bytes.Buffer{}, "png", Options{DPI: dpi}); err == nil || !strings.Contains(err.Error(), "png") {
			t.Errorf("%d dpi: error %v", dpi, err)
		}
	}
}
