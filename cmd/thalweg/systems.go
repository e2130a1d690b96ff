package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"thalweg/systems"
)

// SystemsOptions are the options of the verb systems.
type SystemsOptions struct{ resultFlags }

// NewCmdSystems builds the verb systems; runF replaces its run function in tests.
func NewCmdSystems(e *env, runF func(*SystemsOptions) error) *cobra.Command {
	o := &SystemsOptions{}
	cmd := &cobra.Command{
		Use:   "systems",
		Short: "List the built-in systems",
		Long: `List the built-in systems: their components and solids, the range of temperature
for which each vouches, and how well it meets measurements.`,
		Example: `  thalweg systems
  thalweg systems --format csv --output systems.csv`,
		Args:              noArguments,
		ValidArgsFunction: cobra.NoFileCompletions,
		RunE: func(*cobra.Command, []string) error {
			if err := o.check(); err != nil {
				return err
			}
			if err := checkTargets(o.Output, nil); err != nil {
				return err
			}
			if runF != nil {
				return runF(o)
			}
			return systemsRun(e, o)
		},
	}
	o.add(cmd)
	return cmd
}

func systemsRun(e *env, o *SystemsOptions) error {
	var files []*systems.File
	for _, name := range systems.Names() {
		f, err := systems.Builtin(name)
		if err != nil {
			return err
		}
		files = append(files, f)
	}
	result, err := systemsResult(o.Format, files)
	if err != nil {
		return err
	}
	return e.deliver(o.Output, result)
}

func systemsResult(format string, files []*systems.File) ([]byte, error) {
	switch format {
	case "json":
		list := []systemJSON{}
		for _, f := range files {
			list = append(list, newSystemJSON(f))
		}
		return toJSON(map[string]any{"systems": list})
	case "csv":
		t := newCSV("name", "title", "components", "solids", "pressure_GPa", "temperature_from_C", "temperature_to_C", "calibration")
		for _, f := range files {
			t.row(f.Name, f.Title, strings.Join(componentSymbols(f), " "), strings.Join(f.SolidSymbols(), " "),
				exact(f.PressureGPa), exact(f.TemperatureC[0]), exact(f.TemperatureC[1]), f.Calibration)
		}
		return t.bytes()
	}
	var b strings.Builder
	for i, f := range files {
		if i > 0 {
			b.WriteString("\n")
		}
		systemText(&b, f)
	}
	return []byte(b.String()), nil
}

// systemText is a system in a few lines.
func systemText(b *strings.Builder, f *systems.File) {
	fmt.Fprintf(b, "%s\n", f.Name)
	wrap(b, "  title        ", f.Title)
	wrap(b, "  components   ", strings.Join(componentSymbols(f), ", "))
	wrap(b, "  solids       ", strings.Join(solidList(f), ", "))
	wrap(b, "  holds for    ", holdsFor(f))
	if f.Calibration != "" {
		wrap(b, "  calibration  ", f.Calibration)
	}
}

func holdsFor(f *systems.File) string {
	return fmt.Sprintf("%s to %s °C, standard states at %s GPa", short(f.TemperatureC[0]), short(f.TemperatureC[1]), short(f.PressureGPa))
}

func componentSymbols(f *systems.File) []string {
	var out []string
	for _, c := range f.Components {
		out = append(out, c.Symbol)
	}
	return out
}

// solidList names the solids, with the members of a solution: Pl (Ab–An).
func solidList(f *systems.File) []string {
	var out []string
	for _, s := range f.Solids {
		name := s.Symbol
		if len(s.Members) > 1 {
			var members []string
			for _, m := range s.Members {
				members = append(members, m.Symbol)
			}
			name += " (" + strings.Join(members, "–") + ")"
		}
		out = append(out, name)
	}
	return out
}

// systemJSON is a system as systems and show give it.
type systemJSON struct {
	Name              string          `json:"name"`
	Title             string          `json:"title"`
	About             string          `json:"about"`
	Components        []componentJSON `json:"components"`
	Solids            []solidJSON     `json:"solids"`
	PressureGPa       number          `json:"pressure_GPa"`
	TemperatureRangeC [2]number       `json:"temperature_range_C"`
	TemperatureScale  string          `json:"temperature_scale"`
	BasisNote         string          `json:"mixing_unit"`
	Calibration       string          `json:"calibration"`
	Limits            []string        `json:"limits"`
	Cautions          []string        `json:"cautions"`
	SHA256            string          `json:"system_sha256"`
	Values            []valueJSON     `json:"values,omitempty"`
}

type solidJSON struct {
	Symbol  string       `json:"symbol"`
	Name    string       `json:"name"`
	Remark  string       `json:"remark"`
	Members []memberJSON `json:"members"`
}

type memberJSON struct {
	Symbol  string  `json:"symbol"`
	Formula string  `json:"formula"`
	Moles   amounts `json:"moles_of_components"`
}

func newSystemJSON(f *systems.File) systemJSON {
	j := systemJSON{
		Name: f.Name, Title: f.Title, About: f.About, Components: componentsJSON(f.Components),
		PressureGPa: number(f.PressureGPa), TemperatureRangeC: [2]number{number(f.TemperatureC[0]), number(f.TemperatureC[1])},
		TemperatureScale: f.TemperatureScale, BasisNote: f.Basis, Calibration: f.Calibration,
		Limits: list(f.Limits), Cautions: list(f.Cautions), SHA256: f.SHA256(),
	}
	for _, s := range f.Solids {
		sj := solidJSON{Symbol: s.Symbol, Name: s.Name, Remark: s.Remark}
		for _, m := range s.Members {
			mj := memberJSON{Symbol: m.Symbol, Formula: m.Formula.String()}
			for i, c := range f.Components {
				mj.Moles = append(mj.Moles, amount{c.Symbol, number(m.Composition[i])})
			}
			sj.Members = append(sj.Members, mj)
		}
		j.Solids = append(j.Solids, sj)
	}
	return j
}
