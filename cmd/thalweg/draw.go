package main

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/render"
	"thalweg/systems"
)

// DrawOptions are the options of the verb draw.
type DrawOptions struct {
	figureFlags
	Plan   string
	Output string
	Format string
	Quiet  bool
}

// NewCmdDraw builds the verb draw; runF replaces its run function in tests.
func NewCmdDraw(e *env, runF func(*DrawOptions) error) *cobra.Command {
	o := &DrawOptions{}
	var result resultFlags
	cmd := &cobra.Command{
		Use:   "draw PLAN.toml --figure FILE",
		Short: "Compose one figure of several panels from a plan",
		Long: `Compose one figure of several panels from a plan: projections, isothermal sections,
joins, and charts of a path (phases, liquid, heat), in a grid with letters, of one or
several systems, with samples. Beside a figure NAME.pdf its caption is written into
NAME.caption.txt, anew each time; a file of that name from elsewhere is left alone.

A plan is a .toml file. Its settings at the top (system, basis, style, width_mm,
columns, letters, legend, samples) hold for every panel without its own. A panel has
a kind and what the kind needs; view shows a part of the triangle, or turns it, by
the compositions at its top, lower left and lower right corner; hide leaves out
layers; lines sets widths of lines in pt.

  system = "di-ab-an"
  columns = 2
  [[panel]]
  kind = "projection"
  bulk = ["Di=30,Ab=35,An=35"]
  mode = "fractional"
  [[panel]]
  kind = "phases"
  bulk = ["Di=30,Ab=35,An=35"]
  mode = "fractional"

The result lists what was drawn; it is the caption of the figure.`,
		Example: `  thalweg draw plan.toml --figure figure.pdf
  thalweg draw plan.toml --figure figure.svg --figure figure.png --ink`,
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) != 1 {
				return &usageError{What: fmt.Sprintf("one plan is wanted, but there are %d arguments", len(args)), Remedy: "name a plan, which ends in .toml; see " + cmd.CommandPath() + " --help"}
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, args []string) error {
			o.Plan = args[0]
			o.Output, o.Format, o.Quiet = result.Output, result.Format, result.Quiet
			if err := o.check(&result); err != nil {
				return err
			}
			if runF != nil {
				return runF(o)
			}
			return drawRun(e, o)
		},
	}
	result.add(cmd)
	o.figureFlags.add(cmd)
	cmd.ValidArgsFunction = endings("toml")
	return cmd
}

func (o *DrawOptions) check(result *resultFlags) error {
	if len(o.Figures) == 0 {
		return &usageError{What: "there is no file to draw into", Remedy: "add --figure figure.pdf"}
	}
	for _, check := range []func() error{result.check, o.figureFlags.check} {
		if err := check(); err != nil {
			return err
		}
	}
	if o.Format == "csv" {
		return &usageError{Where: "--format", What: "a composed figure has no table", Remedy: "write text or json, or run the verb of a panel"}
	}
	return checkTargets(o.Output, o.Figures, o.Plan)
}

// pageHeight is the height, in mm, that the page of a journal holds: 234 at Springer,
// 240 at Elsevier.
const pageHeight = 235

// drawn is a composed figure in the making.
type drawn struct {
	e     *env
	o     *DrawOptions
	plan  *plan
	doc   *systems.Document
	style render.Style
	// subjects by what they were opened with, so that a system is computed once
	subjects map[string]*subject
	main     *subject // the first one, for the record of the figure's origin
	captions []string
	legend   []render.Figure
	reasons  []string
}

func drawRun(e *env, o *DrawOptions) error {
	p, doc, err := readPlan(o.Plan)
	if err != nil {
		return err
	}
	d := &drawn{e: e, o: o, plan: p, doc: doc, subjects: map[string]*subject{}}
	if err := d.guardCaptions(); err != nil {
		return err
	}
	if err := d.look(); err != nil {
		return err
	}
	page := render.Plate{Columns: 1, Letters: len(p.Panel) > 1, Style: d.style, WidthMM: d.width(), Title: p.Title}
	if p.Columns != nil {
		page.Columns = *p.Columns
	}
	if p.Letters != nil {
		page.Letters = *p.Letters
	}
	bar := e.startProgress(o.Quiet, "panels", len(p.Panel))
	for i := range p.Panel {
		panel, err := d.panel(i)
		if err != nil {
			bar.stop()
			return err
		}
		page.Panels = append(page.Panels, panel)
		bar.step()
	}
	bar.stop()
	if p.Legend {
		page.Legend = d.legend
	}
	page.Provenance = d.main.provenance("draw", portable(o.Plan))
	plan, err := os.ReadFile(o.Plan)
	if err != nil {
		return &usageError{Where: o.Plan, What: "it cannot be read: " + plainCause(err).Error(), Remedy: "check the path", Err: err}
	}
	d.main.input("plan", o.Plan, plan)
	scene, err := page.Scene()
	if err != nil {
		return d.misplaced(err)
	}
	if scene.Height > pageHeight && d.style.Zoom == 0 {
		e.notice(o.Quiet, "the figure is %.0f mm high; the pages of most journals hold up to %d mm: use more columns or fewer panels", scene.Height, pageHeight)
	}
	if err := o.write(d.main, scene, nil); err != nil {
		return err
	}
	text := d.caption()
	var failed []error
	if d.captioned() {
		for _, path := range o.Figures {
			failed = append(failed, replaceFile(captionPath(path), []byte(text)))
		}
	}
	result := []byte(text)
	if o.Format == "json" {
		if result, err = toJSON(d.json()); err != nil {
			return err
		}
	}
	return errors.Join(errors.Join(failed...), e.deliver(o.Output, result), incomplete(d.reasons))
}

// captionPath is the caption's file beside a figure.
func captionPath(figure string) string {
	return strings.TrimSuffix(figure, filepath.Ext(figure)) + ".caption.txt"
}

// captioned reports that captions are written beside the figures.
func (d *drawn) captioned() bool { return d.plan.Caption == nil || *d.plan.Caption }

// captionMark stands in every caption that draw has written.
const captionMark = "Computed with " + program + " "

// guardCaptions refuses to replace a file that has the name of a caption but is none:
// the user did not name it.
func (d *drawn) guardCaptions() error {
	if !d.captioned() {
		return nil
	}
	for _, figure := range d.o.Figures {
		path := captionPath(figure)
		old, err := os.ReadFile(path)
		if errors.Is(err, fs.ErrNotExist) || err == nil && bytes.Contains(old, []byte(captionMark)) {
			continue
		}
		return &usageError{Where: path, What: "the figure's caption would replace it, but it is no caption of " + program,
			Remedy: "rename it, name the figure otherwise, or write caption = false at the top of the plan", Err: err}
	}
	return nil
}

// look is the style of the page: that of the plan, unless flags say otherwise.
func (d *drawn) look() error {
	f := d.o.figureFlags
	if changed := f.cmd != nil && f.cmd.Flags().Changed("style"); !changed && d.plan.Style != "" {
		f.Style = d.plan.Style
	}
	f.Ink = f.Ink || d.plan.Ink
	var err error
	d.style, err = f.look()
	return err
}

// width of the page, mm.
func (d *drawn) width() float64 {
	f := d.o.figureFlags
	switch {
	case f.cmd != nil && f.cmd.Flags().Changed("width"):
		return f.WidthMM
	case d.plan.WidthMM != 0:
		return d.plan.WidthMM
	}
	return d.style.Width
}

// misplaced names the plan's line for an error of the page.
func (d *drawn) misplaced(err error) error {
	var fig *render.FigureError
	if !errors.As(err, &fig) {
		return figureError(err)
	}
	key := map[string]string{"plate": "columns", "figure width": "width_mm"}[fig.Where]
	what := fig.What
	if fig.Why != "" {
		what += ": " + fig.Why
	}
	d.doc.Add(key, what, fig.Remedy)
	return badInput(d.doc.Err())
}

// caption is the text beside the figure, ready for the manuscript.
func (d *drawn) caption() string {
	var b bytes.Buffer
	if d.plan.Title != "" {
		fmt.Fprintf(&b, "%s. ", strings.TrimSuffix(d.plan.Title, "."))
	}
	for i, c := range d.captions {
		if len(d.captions) > 1 {
			fmt.Fprintf(&b, "(%c) ", 'a'+i%26)
		}
		b.WriteString(c + " ")
	}
	var sources []string
	for _, s := range d.order() {
		fmt.Fprintf(&b, "\n\nSystem %s (SHA-256 %s) at %s GPa, compositions in %s", s.sys.Name, s.file.SHA256()[:12], short(s.sys.Pressure/pascal), s.basis.Unit())
		if m := s.metastable(); m != "" {
			b.WriteString("; " + m)
		}
		b.WriteString(".")
		for _, v := range s.file.Values() {
			src := v.Source
			if v.FittedTo != "" {
				src = "fitted to " + v.FittedTo
			}
			if src != "" && !slices.Contains(sources, src) {
				sources = append(sources, src)
			}
		}
	}
	fmt.Fprintf(&b, "\n\nNumbers of the systems: %s.", strings.TrimSuffix(strings.Join(sources, "; "), "."))
	fmt.Fprintf(&b, "\n\n%s%s from %s; temperatures are estimates, as good as these numbers.\n", captionMark, d.main.version, portable(d.o.Plan))
	return b.String()
}
