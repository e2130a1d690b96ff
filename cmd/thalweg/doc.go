// Command thalweg computes liquidus projections and lines of descent of ternary
// systems, prints them as text, JSON or CSV and draws them for print.
//
// Data flow: main.go runs the command tree of root.go. Each verb has its Options,
// filled from the command line, and a run function: systems.go, show.go,
// liquidus.go, descend.go. A verb opens its system (system.go), reads bulk
// compositions (bulk.go, samples.go), has the rooms below do the work, and hands
// the result to its writers: VERB_text.go, VERB_json.go, VERB_csv.go and
// figure.go. A writer makes the whole result in memory; output.go puts it where
// it belongs in one step.
//
// There is no science here. Results come in kelvin, pascal and mole fractions;
// numbers.go turns them into °C, GPa and percent of the basis in force.
// Results go to standard output, everything else to standard error. The exit
// code is 0 when all was done, 1 when a computation could not be completed or
// failed its own checks, 2 on wrong usage or bad input (failure.go).
package main
