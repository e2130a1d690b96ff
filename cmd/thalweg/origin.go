package main

import (
	"crypto/sha256"
	"encoding/csv"
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"thalweg/render"
)

// idleInFigures are flags that leave a figure as it is.
var idleInFigures = []string{"figure", "output", "format", "quiet"}

// onlyFor are flags that bear on one format of a figure.
var onlyFor = map[string]string{"dpi": "png", "svg-text": "svg"}

// figureOrigin says how a figure that cmd is drawing from s is made again in a
// format.
func figureOrigin(cmd *cobra.Command, s *subject, format string) *render.Origin {
	o := &render.Origin{Program: program, Version: s.version, Command: command(cmd, s, format)}
	o.Inputs = append(o.Inputs, render.Input{Kind: "system", Name: portable(s.given), SHA256: s.file.SHA256()})
	o.Inputs = append(o.Inputs, s.read...)
	for _, v := range s.file.Values() {
		src := v.Source
		if v.FittedTo != "" {
			src = "fitted to " + v.FittedTo
		}
		if src != "" && !slices.Contains(o.Sources, src) {
			o.Sources = append(o.Sources, src)
		}
	}
	return o
}

// command is the command line in one spelling for all that draw the same figure:
// the verb, what it works on, and in the order of the alphabet the flags that
// differ from their defaults.
func command(cmd *cobra.Command, s *subject, format string) []string {
	out := []string{cmd.Name()}
	for _, a := range cmd.Flags().Args() {
		out = append(out, portable(a))
	}
	if len(out) == 1 {
		out = append(out, portable(s.given))
	}
	cmd.Flags().Visit(func(f *pflag.Flag) {
		if only, ok := onlyFor[f.Name]; ok && only != format || slices.Contains(idleInFigures, f.Name) {
			return
		}
		if f.Value.String() == f.DefValue {
			return
		}
		name := "--" + f.Name
		switch list, isList := f.Value.(pflag.SliceValue); {
		case f.Value.Type() == "bool":
			out = append(out, name+map[string]string{"true": "", "false": "=false"}[f.Value.String()])
		case isList:
			for _, v := range list.GetSlice() {
				if f.Value.Type() == "stringSlice" {
					v = csvWord(v) // pflag reads it as a line of CSV
				}
				out = append(out, name, portable(v))
			}
		default:
			out = append(out, name, portable(f.Value.String()))
		}
	})
	return out
}

// csvWord quotes a word that would be cut at its commas.
func csvWord(s string) string {
	var b strings.Builder
	w := csv.NewWriter(&b)
	_ = w.Write([]string{s}) // writing to memory cannot fail
	w.Flush()
	return strings.TrimSuffix(b.String(), "\n")
}

// portable is a path as figures name it. Figures are published, and an absolute
// path would tell the names of folders; the hash beside it says which file is
// meant.
func portable(path string) string {
	if filepath.IsAbs(path) {
		return filepath.Base(path)
	}
	return filepath.ToSlash(path)
}

// input records that a file was read.
func (s *subject) input(kind, path string, data []byte) {
	s.read = append(s.read, render.Input{Kind: kind, Name: portable(path), SHA256: hash(data)})
}

// hash is the SHA-256 of data in hexadecimal.
func hash(data []byte) string { return fmt.Sprintf("%x", sha256.Sum256(data)) }
