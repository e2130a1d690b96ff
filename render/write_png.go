package render

import (
	"bytes"
	"fmt"
	"hash/crc32"
	"image"
	"image/color"
	"image/draw"
	"image/png"
	"io"
	"math"

	"github.com/tdewolff/canvas"
	"github.com/tdewolff/canvas/renderers/rasterizer"
)

// MostDPI is the highest resolution of the png writer, pixels per inch.
const MostDPI = 4800

// Limits of the png writer.
const (
	defaultDPI = 300
	maxPixels  = 400e6
)

// writePNG writes the scene on white at o.DPI, with its physical size and
// metadata.
func writePNG(w io.Writer, s *Scene, m metadata, o Options) error {
	img, dpi, err := s.raster(o.DPI)
	if err != nil {
		return err
	}
	var b bytes.Buffer
	if err := png.Encode(&b, img); err != nil {
		return fmt.Errorf("encoding the png figure: %w", err)
	}
	return insertChunks(w, b.Bytes(), dpi, m)
}

// raster paints the scene on a white picture.
func (s *Scene) raster(dpi int) (*image.RGBA, int, error) {
	if dpi == 0 {
		dpi = defaultDPI
	}
	if dpi < 1 || dpi > MostDPI {
		return nil, 0, &FigureError{What: fmt.Sprintf("a png cannot have %d dpi", dpi), Where: "figure resolution", Remedy: fmt.Sprintf("use 1 to %d", MostDPI)}
	}
	px := func(mm float64) int { return max(1, int(math.Round(mm/25.4*float64(dpi)))) }
	w, h := px(s.Width), px(s.Height)
	if float64(w)*float64(h) > maxPixels {
		return nil, 0, &FigureError{What: fmt.Sprintf("a png of %d × %d pixels is too large", w, h), Where: "figure resolution", Remedy: "lower the dpi or the width"}
	}
	img := image.NewRGBA(image.Rect(0, 0, w, h))
	draw.Draw(img, img.Bounds(), image.White, image.Point{}, draw.Src)
	ras := rasterizer.FromImage(img, canvas.DPI(float64(dpi)), canvas.LinearColorSpace{})
	// The picture is rounded to whole pixels: shift so that the page's top
	// left corner, not its bottom left, is exact, as in the other formats.
	shift := canvas.Identity.Translate(0, float64(h)/float64(dpi)*25.4-s.Height)
	for _, l := range s.Layers {
		for _, it := range l.Items {
			switch it := it.(type) {
			case *PathItem:
				rasterPath(ras, it, shift)
			case *TextItem:
				if p := it.Outline(); !p.Empty() {
					ras.RenderPath(canvasPath(p), canvas.Style{Fill: paint(it.Colour)}, shift)
				}
			}
		}
	}
	ras.Close()
	return img, dpi, nil
}

func rasterPath(ras *rasterizer.Rasterizer, it *PathItem, m canvas.Matrix) {
	if it.Path.Empty() {
		return
	}
	p := canvasPath(it.Path)
	if it.Fill != nil {
		ras.RenderPath(p, canvas.Style{Fill: paint(*it.Fill)}, m)
	}
	if !it.Stroke.painted() {
		return
	}
	st := canvas.Style{
		Stroke:       paint(it.Stroke.Colour),
		StrokeWidth:  it.Stroke.Width,
		StrokeCapper: canvas.ButtCap,
		StrokeJoiner: canvas.MiterJoin, // limit 4, then bevel
	}
	if it.Stroke.Round {
		st.StrokeCapper, st.StrokeJoiner = canvas.RoundCap, canvas.RoundJoin
	}
	for _, d := range it.Stroke.dashes() { // canvas counts dashes in line widths
		st.Dashes = append(st.Dashes, d/it.Stroke.Width)
	}
	ras.RenderPath(p, st, m)
}

func paint(c Colour) canvas.Paint {
	return canvas.Paint{Color: color.RGBA{R: c.R, G: c.G, B: c.B, A: 255}}
}

func canvasPath(p Path) *canvas.Path {
	out := &canvas.Path{}
	p.each(func(op pathOp, _ Point, pts []Point) {
		switch op {
		case opMove:
			out.MoveTo(pts[0].X, pts[0].Y)
		case opLine:
			out.LineTo(pts[0].X, pts[0].Y)
		case opCube:
			out.CubeTo(pts[0].X, pts[0].Y, pts[1].X, pts[1].Y, pts[2].X, pts[2].Y)
		case opClose:
			out.Close()
		}
	})
	return out
}

// itxtPlain follows the keyword of a text that is not compressed and has neither
// language nor translated keyword.
const itxtPlain = "\x00\x00\x00\x00\x00"

// insertChunks copies an encoded picture, adding after its header the colour
// space, the physical size and the metadata, and before its end a hash of all that
// stands there, by which a later change shows.
func insertChunks(w io.Writer, pic []byte, dpi int, m metadata) error {
	const header = 8 + 25 // signature and IHDR
	var b bytes.Buffer
	b.Write(pic[:header])
	appendChunk(&b, "sRGB", []byte{0})
	perMetre := uint32(math.Round(float64(dpi) / 0.0254))
	appendChunk(&b, "pHYs", append(be.AppendUint32(be.AppendUint32(nil, perMetre), perMetre), 1))
	for _, e := range []struct{ key, value string }{
		{"Title", m.title}, {"Description", m.description}, {"Software", m.producer}, {"Source", m.provenance}, {recordKey, m.origin},
	} {
		if e.value != "" {
			appendChunk(&b, "iTXt", []byte(e.key+itxtPlain+e.value))
		}
	}
	end := len(pic) - 12 // of IEND, which is empty
	b.Write(pic[header:end])
	if m.origin != "" {
		appendChunk(&b, "iTXt", []byte(sealKey+itxtPlain+hashHex(b.Bytes())))
	}
	b.Write(pic[end:])
	_, err := w.Write(b.Bytes())
	return err
}

func appendChunk(b *bytes.Buffer, kind string, data []byte) {
	body := append([]byte(kind), data...)
	b.Write(be.AppendUint32(nil, uint32(len(data))))
	b.Write(body)
	b.Write(be.AppendUint32(nil, crc32.ChecksumIEEE(body)))
}
