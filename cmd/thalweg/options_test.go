package main

import (
	"bytes"
	"reflect"
	"testing"

	"github.com/spf13/cobra"

	"thalweg/ternary"
)

// parse runs one command on arguments with a run function that does nothing.
func parse(t *testing.T, cmd *cobra.Command, args []string) {
	t.Helper()
	cmd.SilenceErrors, cmd.SilenceUsage = true, true
	cmd.SetArgs(args)
	if err := cmd.Execute(); err != nil {
		t.Fatalf("%q: %v", args, err)
	}
}

// noFigure are the flags of figures as they stand.
var noFigure = figureFlags{WidthMM: 174, Style: "double-174", Shade: "solids", DPI: 300, SVGText: "text"}

func TestLiquidusOptions(t *testing.T) {
	t.Chdir(t.TempDir())
	pressure := 0.2
	base := LiquidusOptions{
		resultFlags: resultFlags{Format: "text", Output: "-"},
		systemFlags: systemFlags{Basis: "wt", basis: ternary.Mass},
		figureFlags: noFigure,
		Isotherms:   "auto",
	}
	tests := []struct {
		name string
		args []string
		want func(*LiquidusOptions)
	}{
		{"nothing", nil, func(*LiquidusOptions) {}},
		{"system", []string{"di-an-fo"}, func(o *LiquidusOptions) { o.System = "di-an-fo" }},
		{"result", []string{"--format", "json", "--output", "r.json", "--quiet"}, func(o *LiquidusOptions) {
			o.resultFlags = resultFlags{Format: "json", Output: "r.json", Quiet: true}
		}},
		{"basis", []string{"--basis=mol"}, func(o *LiquidusOptions) { o.Basis, o.basis = "mol", ternary.Mole }},
		{"without, twice and as a list", []string{"--without", "Fo", "--without", "An,Di"}, func(o *LiquidusOptions) { o.Without = []string{"Fo", "An", "Di"} }},
		{"pressure", []string{"--pressure", "0.2"}, func(o *LiquidusOptions) { o.Pressure, o.pressure = &pressure, 0.2 }},
		{"figures", []string{"--figure", "a.pdf", "--figure", "b,c.PNG", "--width", "90", "--style", "small-89", "--ink", "--dpi", "600", "--svg-text", "outlines"}, func(o *LiquidusOptions) {
			o.figureFlags = figureFlags{Figures: []string{"a.pdf", "b,c.PNG"}, WidthMM: 90, Style: "small-89", Ink: true, Shade: "solids", DPI: 600, SVGText: "outlines"}
		}},
		{"width of the style", []string{"--style", "single-84", "--shade", "temperature"}, func(o *LiquidusOptions) {
			o.Style, o.WidthMM, o.Shade = "single-84", 84, "temperature"
		}},
		{"interval", []string{"--isotherms", "25"}, func(o *LiquidusOptions) { o.Isotherms, o.isotherms = "25", isotherms{interval: 25} }},
		{"samples", []string{"--samples", "s.csv"}, func(o *LiquidusOptions) { o.Samples = "s.csv" }},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			var got *LiquidusOptions
			e := newEnv(&bytes.Buffer{}, &bytes.Buffer{})
			parse(t, NewCmdLiquidus(e, func(o *LiquidusOptions) error { got = o; return nil }), tt.args)
			got.cmd = nil // the command itself is not compared
			want := base
			tt.want(&want)
			if !reflect.DeepEqual(*got, want) {
				t.Errorf("got  %+v\nwant %+v", *got, want)
			}
		})
	}
}

func TestDescendOptions(t *testing.T) {
	t.Chdir(t.TempDir())
	tests := []struct {
		name                string
		args                []string
		bulk, mode, samples string
	}{
		{"bulk", []string{"--bulk", "Di=1,An=2"}, "Di=1,An=2", "equilibrium", ""},
		{"mode", []string{"--bulk", "Di=1", "--mode", "fractional"}, "Di=1", "fractional", ""},
		{"samples", []string{"lif-naf-kf", "--samples", "s.csv"}, "", "equilibrium", "s.csv"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			var got *DescendOptions
			e := newEnv(&bytes.Buffer{}, &bytes.Buffer{})
			parse(t, NewCmdDescend(e, func(o *DescendOptions) error { got = o; return nil }), tt.args)
			if got.Bulk != tt.bulk || got.Mode != tt.mode || got.Samples != tt.samples {
				t.Errorf("got bulk %q, mode %q, samples %q", got.Bulk, got.Mode, got.Samples)
			}
		})
	}
}

func TestShowAndSystemsOptions(t *testing.T) {
	e := newEnv(&bytes.Buffer{}, &bytes.Buffer{})
	var show *ShowOptions
	parse(t, NewCmdShow(e, func(o *ShowOptions) error { show = o; return nil }), []string{"di-ab-an", "--format", "csv"})
	if show.System != "di-ab-an" || show.Format != "csv" || show.Output != "-" {
		t.Errorf("show: %+v", *show)
	}
	var all *SystemsOptions
	parse(t, NewCmdSystems(e, func(o *SystemsOptions) error { all = o; return nil }), []string{"--format", "json"})
	if all.Format != "json" {
		t.Errorf("systems: %+v", *all)
	}
}

func TestParseIsotherms(t *testing.T) {
	tests := []struct {
		text string
		want isotherms
	}{
		{"auto", isotherms{}},
		{"none", isotherms{none: true}},
		{"50", isotherms{interval: 50}},
		{" 2.5 ", isotherms{interval: 2.5}},
		{"1250,", isotherms{list: []float64{1250}}},
		{"-5,20, 10,20", isotherms{list: []float64{20, 10, -5}}},
	}
	for _, tt := range tests {
		got, err := parseIsotherms(tt.text)
		if err != nil || !reflect.DeepEqual(got, tt.want) {
			t.Errorf("%q: got %+v, %v; want %+v", tt.text, got, err, tt.want)
		}
	}
	for _, text := range []string{"0", "-50", "NaN", "Inf", "x", "1,,2", ",", "1e999", "1200,-274"} {
		if _, err := parseIsotherms(text); exitCode(err) != exitUsage {
			t.Errorf("%q: error %v, exit %d", text, err, exitCode(err))
		}
	}
}

func TestChooseIsotherms(t *testing.T) {
	tests := []struct {
		name      string
		o         isotherms
		low, high float64
		vouched   [2]float64
		want      []float64
		interval  float64
	}{
		{"chosen", isotherms{}, 1089, 1553, [2]float64{1000, 1600}, []float64{1550, 1500, 1450, 1400, 1350, 1300, 1250, 1200, 1150, 1100}, 50},
		{"only where the file vouches", isotherms{}, 78, 1553, [2]float64{1200, 1900}, []float64{1550, 1500, 1450, 1400, 1350, 1300, 1250, 1200}, 50},
		{"nowhere", isotherms{}, 78, 1000, [2]float64{1200, 1900}, nil, 0},
		{"interval", isotherms{interval: 100}, 1089, 1553, [2]float64{1000, 1600}, []float64{1500, 1400, 1300, 1200, 1100}, 100},
		{"interval larger than the span", isotherms{interval: 1000}, 1089, 1553, [2]float64{1000, 1600}, nil, 1000},
		{"across zero", isotherms{interval: 20}, -30, 30, [2]float64{-50, 50}, []float64{20, 0, -20}, 20},
		{"list", isotherms{list: []float64{5000, 1200}}, 1089, 1553, [2]float64{1300, 1600}, []float64{5000, 1200}, 0},
		{"none", isotherms{none: true}, 1089, 1553, [2]float64{1000, 1600}, nil, 0},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, interval, err := tt.o.choose(tt.low, tt.high, tt.vouched)
			if err != nil || !reflect.DeepEqual(got, tt.want) || interval != tt.interval {
				t.Errorf("got %v every %g, %v; want %v every %g", got, interval, err, tt.want, tt.interval)
			}
		})
	}
}

func TestCompletion(t *testing.T) {
	tests := []struct {
		name string
		args []string
		want []string
		not  []string
	}{
		{"verbs", []string{""}, []string{"systems", "show", "liquidus", "descend"}, nil},
		{"systems", []string{"liquidus", ""}, []string{"di-ab-an\tDiopside", "di-an-fo", "lif-naf-kf"}, nil},
		{"systems by their beginning", []string{"descend", "li"}, []string{"lif-naf-kf"}, []string{"di-ab-an"}},
		{"no second system", []string{"show", "di-ab-an", ""}, nil, []string{"di-an-fo"}},
		{"solids", []string{"liquidus", "di-an-fo", "--without", ""}, []string{"Di\tdiopside", "An\tanorthite", "Fo\tforsterite"}, nil},
		{"solids of the default system", []string{"liquidus", "--without", ""}, []string{"Di", "Pl"}, []string{"Fo"}},
		{"further solids", []string{"liquidus", "di-an-fo", "--without", "Di,A"}, []string{"Di,An"}, []string{"Fo"}},
		{"formats", []string{"show", "--format", ""}, []string{"text", "json", "csv"}, nil},
		{"modes", []string{"descend", "--mode", ""}, []string{"equilibrium", "fractional"}, nil},
		{"basis", []string{"descend", "--basis", ""}, []string{"wt", "mol"}, nil},
		{"styles", []string{"liquidus", "--style", ""}, []string{"single-84", "middle-140", "heavy-185", "slides"}, nil},
		{"widths", []string{"liquidus", "--width", ""}, []string{"84", "174"}, nil},
		{"shades", []string{"descend", "--shade", ""}, []string{"solids", "temperature"}, nil},
		{"figures", []string{"liquidus", "--figure", ""}, []string{"pdf", "svg", "png"}, nil},
		{"bulk", []string{"descend", "di-an-fo", "--bulk", "An=3,"}, []string{"An=3,Di=", "An=3,Fo="}, []string{"An=3,An="}},
		{"unknown system", []string{"liquidus", "nowhere", "--without", ""}, nil, []string{"Di"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			code, out, errText := run(append([]string{cobra.ShellCompRequestCmd}, tt.args...)...)
			if code != exitDone {
				t.Fatalf("exit %d: %s", code, errText)
			}
			for _, w := range tt.want {
				if !bytes.Contains([]byte("\n"+out), []byte("\n"+w)) {
					t.Errorf("no %q in\n%s", w, out)
				}
			}
			for _, w := range tt.not {
				if bytes.Contains([]byte("\n"+out), []byte("\n"+w)) {
					t.Errorf("%q in\n%s", w, out)
				}
			}
		})
	}
	for _, shell := range []string{"bash", "zsh", "fish", "powershell"} {
		if code, out, _ := run("completion", shell); code != exitDone || len(out) < 1000 {
			t.Errorf("completion %s: exit %d, %d bytes", shell, code, len(out))
		}
	}
}
