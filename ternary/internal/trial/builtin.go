package trial

import (
	"testing"

	"thalweg/systems"
	"thalweg/ternary/gibbs"
)

// Builtin is a built-in system at the pressure of its file.
func Builtin(t testing.TB, name string) *gibbs.System {
	t.Helper()
	f, err := systems.Builtin(name)
	if err != nil {
		t.Fatal(err)
	}
	sys, err := f.AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	return sys
}
