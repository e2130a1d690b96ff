package main

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// introduction is what the bare command prints.
const introduction = `thalweg computes what a melt of three components does on cooling and heating: the
liquidus projection of the system, sections through it, and the line of descent of a
composition in it; and draws them for print.

Three examples, ready to run:

  thalweg liquidus di-an-fo
      eutectics, boundary curves and primary fields of diopside-anorthite-forsterite

  thalweg descend di-ab-an --bulk Di=30,Ab=35,An=35 --mode fractional
      what a melt of this composition (wt%) makes when its crystals are taken away

  thalweg liquidus lif-naf-kf --basis mol --figure salt.pdf
      the projection of a fluoride salt in mol%, drawn for print

Computed temperatures are estimates, as good as the numbers in the system file;
"thalweg show SYSTEM" says where each of them comes from.
`

// NewCmdRoot builds the command tree.
func NewCmdRoot(e *env) *cobra.Command {
	cmd := &cobra.Command{
		Use:           program,
		Short:         "Liquidus projections and lines of descent of ternary systems",
		Long:          introduction,
		Version:       e.version,
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          knownVerb,
		RunE: func(cmd *cobra.Command, _ []string) error {
			_, err := fmt.Fprintf(e.out, "%s\n%s", introduction, cmd.UsageString())
			return err
		},
		CompletionOptions: cobra.CompletionOptions{HiddenDefaultCmd: false},
	}
	cmd.SetFlagErrorFunc(flagError)
	cmd.SetVersionTemplate("{{.Name}} {{.Version}}\n")
	cmd.AddCommand(NewCmdSystems(e, nil), NewCmdShow(e, nil), NewCmdLiquidus(e, nil), NewCmdDescend(e, nil), NewCmdMelt(e, nil),
		NewCmdSection(e, nil), NewCmdJoin(e, nil), NewCmdAffinity(e, nil), NewCmdPressure(e, nil), NewCmdDraw(e, nil))
	return cmd
}

// flagError says in plain words what is wrong with a flag.
func flagError(c *cobra.Command, err error) error {
	out := &usageError{What: err.Error(), Remedy: seeHelp(c), Err: err}
	var value *pflag.InvalidValueError
	if !errors.As(err, &value) {
		return out
	}
	f := value.GetFlag()
	why, remedy := "", ""
	switch f.Value.Type() {
	case "float64":
		why, remedy = "not a number", "write it without a unit and with a decimal point; "
	case "int":
		why, remedy = "not a whole number", "write digits alone; "
	case "bool":
		why = "neither true nor false"
	default:
		return out
	}
	if errors.Is(err, strconv.ErrRange) {
		why, remedy = "out of range", ""
	}
	out.What = fmt.Sprintf("--%s %s: %q is %s", f.Name, value.GetValue(), value.GetValue(), why)
	out.Remedy = remedy + out.Remedy
	return out
}

// knownVerb refuses arguments of the bare command: they are verbs that do not
// exist.
func knownVerb(cmd *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	if cmd.SuggestionsMinimumDistance <= 0 {
		cmd.SuggestionsMinimumDistance = 2
	}
	remedy := "the verbs are " + verbList(cmd)
	if near := cmd.SuggestionsFor(args[0]); len(near) > 0 {
		remedy = "did you mean " + strings.Join(near, " or ") + "?"
	}
	return &usageError{What: fmt.Sprintf("%q is not a verb of %s", args[0], program), Remedy: remedy}
}

// verbList names the verbs that do the program's work.
func verbList(root *cobra.Command) string {
	var names []string
	for _, c := range root.Commands() {
		if c.Example != "" { // the others are made by the library
			names = append(names, c.Name())
		}
	}
	last := len(names) - 1
	return strings.Join(names[:last], ", ") + " and " + names[last]
}

// atMostOneSystem is the Args function of the verbs that take a system.
func atMostOneSystem(cmd *cobra.Command, args []string) error {
	if len(args) <= 1 {
		return nil
	}
	return &usageError{What: fmt.Sprintf("one SYSTEM is wanted, but there are %d arguments: %s", len(args), strings.Join(args, " ")), Remedy: seeHelp(cmd)}
}

// noArguments is the Args function of the verbs that take none.
func noArguments(cmd *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	return &usageError{What: fmt.Sprintf("%q is one argument too many", args[0]), Remedy: seeHelp(cmd)}
}

func seeHelp(cmd *cobra.Command) string { return "see " + cmd.CommandPath() + " --help" }
