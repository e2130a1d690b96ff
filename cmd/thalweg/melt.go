package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"thalweg/ternary"
	"thalweg/ternary/descent"
)

// MeltOptions are the options of the verb melt.
type MeltOptions struct {
	resultFlags
	systemFlags
	figureFlags
	bulkFlags
	Mode string
}

// meltModes are the words of --mode and what they stand for.
var meltModes = map[string]descent.Mode{"batch": descent.BatchMelting, "fractional": descent.FractionalMelting}

// NewCmdMelt builds the verb melt; runF replaces its run function in tests.
func NewCmdMelt(e *env, runF func(*MeltOptions) error) *cobra.Command {
	o := &MeltOptions{}
	cmd := &cobra.Command{
		Use:   "melt [SYSTEM] --bulk A=…,B=…,C=…",
		Short: "Melt a solid of a given composition",
		Long: `Heat a solid of a given bulk composition from its first melt until all is molten:
the temperature of the solidus, the liquid, the solids that are left, the share of
melt and the heat taken up.

In batch mode the melt stays with the solids. In fractional mode it leaves as it
forms: the temperature stands still at an invariant point until one solid is used
up, then leaps to the first melting of the rest. "all" is then the mean
composition of all melt so far.

SYSTEM is a built-in name or the path of a .toml file; without it, ` + defaultSystem + `.
The solids are those that are stable below the solidus.`,
		Example: `  thalweg melt di-an-fo --bulk Di=30,An=20,Fo=50
  thalweg melt lif-naf-kf --bulk LiF=30,NaF=30,KF=40 --mode fractional --basis mol
  thalweg melt di-ab-an --bulk Di=30,Ab=35,An=35 --mode fractional --figure melts.pdf --format csv`,
		Args: atMostOneSystem,
		RunE: verb(e, o, &o.figureFlags, &o.Quiet, func(cmd *cobra.Command, args []string) error {
			o.fill(cmd, args)
			return o.check(cmd)
		}, runF, meltRun),
	}
	o.resultFlags.add(cmd)
	o.systemFlags.add(cmd)
	o.figureFlags.add(cmd)
	o.bulkFlags.add(cmd)
	cmd.Flags().StringVar(&o.Mode, "mode", "batch", "`how` the melt stays with the solids: batch or fractional")
	choices(cmd, "mode", "batch", "fractional")
	return cmd
}

func (o *MeltOptions) check(cmd *cobra.Command) error {
	if err := o.bulkFlags.check(cmd); err != nil {
		return err
	}
	if _, ok := meltModes[o.Mode]; !ok {
		return &usageError{Where: "--mode", What: fmt.Sprintf("%q is unknown", o.Mode), Remedy: "write batch or fractional"}
	}
	if err := firstError(o.resultFlags.check, o.systemFlags.check, o.figureFlags.check); err != nil {
		return err
	}
	return checkTargets(o.Output, o.Figures, o.System, o.Samples)
}

func meltRun(e *env, o *MeltOptions) error {
	s, err := e.open(&o.systemFlags, o.Quiet)
	if err != nil {
		return err
	}
	r := &pathsResult{subject: s, mode: meltModes[o.Mode]}
	return r.run(e, &o.bulkFlags, &o.resultFlags, &o.figureFlags, func(x ternary.Composition) (*descent.Path, error) {
		return e.melt(s.sys, x, descent.MeltOptions{Mode: r.mode})
	})
}
