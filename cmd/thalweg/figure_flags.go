package main

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/render"
)

// figureFlags say which figures are drawn, and how.
type figureFlags struct {
	Figures []string
	Style   string  // name of a preset
	WidthMM float64 // 0 until check takes that of the preset
	Ink     bool
	Shade   string // what the colour of fields tells: solids or temperature
	DPI     int
	SVGText string // text or outlines

	cmd *cobra.Command // whose flags these are; nil in tests that call no command
}

// Words of --shade and --svg-text.
var (
	shades   = []string{"solids", "temperature"}
	svgTexts = []string{"text", "outlines"}
)

// figureFlagNames are the flags that do nothing without --figure.
var figureFlagNames = []string{"style", "width", "ink", "shade", "dpi", "svg-text"}

func (f *figureFlags) add(cmd *cobra.Command) {
	f.cmd = cmd
	fs := cmd.Flags()
	fs.StringArrayVar(&f.Figures, "figure", nil, "draw the figure into this `file`; its ending chooses pdf, svg or png (repeatable)")
	fs.StringVar(&f.Style, "style", render.DefaultPreset, "`preset` of width, text and lines: "+presetList())
	fs.Float64Var(&f.WidthMM, "width", 0, "width of the figure in `mm` (default: that of the style)")
	fs.BoolVar(&f.Ink, "ink", false, "draw in black and greys alone")
	fs.StringVar(&f.Shade, "shade", shades[0], "what the `colour` of fields tells: solids or temperature")
	fs.IntVar(&f.DPI, "dpi", 300, "resolution of png figures in `pixels` per inch")
	fs.StringVar(&f.SVGText, "svg-text", svgTexts[0], "`how` svg figures hold their words: text, with its fonts, or outlines")
	choices(cmd, "width", "84", "90", "140", "174", "190")
	choices(cmd, "shade", shades...)
	choices(cmd, "dpi", "300", "600", "1200")
	choices(cmd, "svg-text", svgTexts...)
	_ = cmd.RegisterFlagCompletionFunc("style", completeStyle)
	_ = cmd.RegisterFlagCompletionFunc("figure", endings(figureFormats()...))
}

// presetList names the presets.
func presetList() string {
	var out []string
	for _, p := range render.Presets() {
		out = append(out, p.Name)
	}
	return strings.Join(out, ", ")
}

func completeStyle(*cobra.Command, []string, string) (out []cobra.Completion, _ cobra.ShellCompDirective) {
	for _, p := range render.Presets() {
		out = append(out, cobra.CompletionWithDesc(p.Name, p.About))
	}
	return out, cobra.ShellCompDirectiveNoFileComp
}

// check examines the flags and completes the width.
func (f *figureFlags) check() error {
	for _, path := range f.Figures {
		if !slices.Contains(figureFormats(), figureFormat(path)) {
			return &usageError{Where: "--figure " + path, What: "its ending names no format of a figure", Remedy: "let it end in .pdf, .svg or .png"}
		}
		if err := checkTarget("--figure", path); err != nil {
			return err
		}
	}
	st, err := f.look()
	if err != nil {
		return err
	}
	if f.WidthMM == 0 && (f.cmd == nil || !f.cmd.Flags().Changed("width")) {
		f.WidthMM = st.Width
	}
	if least, most := render.Widths(st); !(f.WidthMM >= least && f.WidthMM <= most) {
		return &usageError{Where: "--width", What: fmt.Sprintf("a figure of the style %s cannot be %g mm wide", st.Name, f.WidthMM),
			Remedy: fmt.Sprintf("give 84 for one column, 174 for two, or another width from %g to %g mm", least, most)}
	}
	if f.DPI < 1 || f.DPI > render.MostDPI {
		return &usageError{Where: "--dpi", What: fmt.Sprintf("%d is no resolution", f.DPI), Remedy: fmt.Sprintf("give 300, 600 or another number from 1 to %d", render.MostDPI)}
	}
	if !slices.Contains(svgTexts, f.SVGText) {
		return &usageError{Where: "--svg-text", What: fmt.Sprintf("%q is unknown", f.SVGText), Remedy: "write text or outlines"}
	}
	return nil
}

// look is the style that the flags describe.
func (f *figureFlags) look() (render.Style, error) {
	if f.Style == "ink" || f.Style == "colour" {
		return render.Style{}, &usageError{Where: "--style", What: fmt.Sprintf("%q is no preset", f.Style), Remedy: "colour is the default, and --ink leaves it out"}
	}
	st, err := render.StyleNamed(f.Style)
	if err != nil {
		return st, &usageError{Where: "--style", What: fmt.Sprintf("%q is unknown", f.Style), Remedy: "write one of " + presetList(), Err: err}
	}
	switch {
	case !slices.Contains(shades, f.Shade):
		return st, &usageError{Where: "--shade", What: fmt.Sprintf("%q is unknown", f.Shade), Remedy: "write solids or temperature"}
	case f.Ink && f.Shade == shades[1]:
		return st, &usageError{Where: "--shade", What: "ink has no colour to tell temperatures with", Remedy: "leave out --ink or --shade"}
	case f.Ink:
		return st.Inked(), nil
	case f.Shade == shades[1]:
		return st.Shaded(), nil
	}
	return st, nil
}

// figureFormat is the ending of a figure's file, which names its format.
func figureFormat(path string) string {
	return strings.ToLower(strings.TrimPrefix(filepath.Ext(path), "."))
}

// idleFigureFlags says which flags do nothing for want of a figure.
func (e *env) idleFigureFlags(cmd *cobra.Command, f *figureFlags, quiet bool) {
	if len(f.Figures) > 0 {
		return
	}
	for _, name := range figureFlagNames {
		if cmd.Flags().Changed(name) {
			e.notice(quiet, "--%s has no effect without --figure", name)
		}
	}
}

// idleShade says that a figure has no fields of temperatures to shade.
func (e *env) idleShade(f *figureFlags, quiet bool, why string) {
	if len(f.Figures) > 0 && f.Shade == shades[1] {
		e.notice(quiet, "%s, so that --shade %s has no effect", why, f.Shade)
	}
}
