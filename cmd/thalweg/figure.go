package main

import (
	"errors"
	"fmt"

	"thalweg/render"
	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

func figureFormats() []string { return render.Formats() }

// picture is what a figure shows.
type picture struct {
	projection *liquidus.Projection
	paths      []*descent.Path
	samples    []sample
	provenance string
}

// draw writes the figures that were asked for. All of them are tried; the error
// joins those that failed.
func (f *figureFlags) draw(s *subject, p picture) error {
	if len(f.Figures) == 0 {
		return nil
	}
	style, err := f.look()
	if err != nil {
		return err
	}
	fig := render.Figure{Projection: p.projection, Paths: p.paths, Basis: s.basis, Style: style, WidthMM: f.WidthMM, Provenance: p.provenance}
	for _, q := range p.samples {
		fig.Samples = append(fig.Samples, render.Sample{Name: q.Name, Composition: q.X})
	}
	scene, err := fig.Scene()
	return f.write(s, scene, err)
}

// write writes a scene to every file that was asked for, each with the command
// that makes it again; err is what its making said.
func (f *figureFlags) write(s *subject, scene *render.Scene, err error) error {
	if err != nil {
		return figureError(err)
	}
	o := render.Options{Producer: program + " " + s.version, DPI: f.DPI, OutlineText: f.SVGText == svgTexts[1]}
	var failed []error
	for _, path := range f.Figures {
		scene.Origin = figureOrigin(f.cmd, s, figureFormat(path))
		if err := scene.WriteFile(path, o); err != nil {
			failed = append(failed, figureError(err))
		}
	}
	return errors.Join(failed...)
}

// figureError marks what the user's words made undrawable: a sample's name with
// a character that the font lacks, a size that no picture can have.
func figureError(err error) error {
	var glyph *render.GlyphError
	var figure *render.FigureError
	if errors.As(err, &glyph) || errors.As(err, &figure) {
		return badInput(err)
	}
	return fmt.Errorf("the figure could not be made: %w", err)
}
