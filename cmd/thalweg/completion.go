package main

import (
	"strings"

	"github.com/spf13/cobra"

	"thalweg/systems"
)

// choices completes a flag from a fixed list.
func choices(cmd *cobra.Command, flag string, values ...string) {
	_ = cmd.RegisterFlagCompletionFunc(flag, cobra.FixedCompletions(values, cobra.ShellCompDirectiveNoFileComp))
}

// endings completes a flag with files of these endings.
func endings(list ...string) cobra.CompletionFunc {
	return func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
		return list, cobra.ShellCompDirectiveFilterFileExt
	}
}

// completeSystem offers the built-in systems; where none fits, the shell offers
// files.
func completeSystem(_ *cobra.Command, args []string, start string) ([]cobra.Completion, cobra.ShellCompDirective) {
	if len(args) > 0 {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	var out []cobra.Completion
	for _, name := range systems.Names() {
		if !strings.HasPrefix(name, start) {
			continue
		}
		title := ""
		if f, err := systems.Builtin(name); err == nil {
			title = f.Title
		}
		out = append(out, cobra.CompletionWithDesc(name, title))
	}
	return out, cobra.ShellCompDirectiveDefault
}

// completeSolids offers the solids of the system on the command line.
func completeSolids(_ *cobra.Command, args []string, start string) ([]cobra.Completion, cobra.ShellCompDirective) {
	f, ok := systemSoFar(args)
	if !ok {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	done, start := splitLast(start)
	var out []cobra.Completion
	for _, s := range f.Solids {
		if strings.HasPrefix(s.Symbol, start) {
			out = append(out, cobra.CompletionWithDesc(done+s.Symbol, s.Name))
		}
	}
	return out, cobra.ShellCompDirectiveNoFileComp
}

// completeBulk offers the components that the bulk does not have yet.
func completeBulk(_ *cobra.Command, args []string, start string) ([]cobra.Completion, cobra.ShellCompDirective) {
	const directive = cobra.ShellCompDirectiveNoFileComp | cobra.ShellCompDirectiveNoSpace
	f, ok := systemSoFar(args)
	if !ok {
		return nil, directive
	}
	done, start := splitLast(start)
	var out []cobra.Completion
	for _, c := range f.Components {
		if strings.HasPrefix(c.Symbol, start) && !strings.Contains(","+done, ","+c.Symbol+"=") {
			out = append(out, cobra.CompletionWithDesc(done+c.Symbol+"=", c.Name))
		}
	}
	return out, directive
}

// splitLast cuts a list behind its last comma.
func splitLast(list string) (done, last string) {
	i := strings.LastIndexByte(list, ',') + 1
	return list[:i], list[i:]
}

func systemSoFar(args []string) (*systems.File, bool) {
	name := defaultSystem
	if len(args) > 0 {
		name = args[0]
	}
	f, err := systems.Open(name)
	return f, err == nil
}
