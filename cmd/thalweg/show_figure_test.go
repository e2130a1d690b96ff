package main

import (
	"bytes"
	"os"
	"slices"
	"strings"
	"testing"

	"thalweg/render"
	"thalweg/systems"
)

// again runs what show says of a figure and returns the name of the new figure.
// The command line is cut as a shell would cut it.
func again(t *testing.T, figure string) string {
	t.Helper()
	v := object(t, "show", figure)
	if len(at(t, v, "obstacles").([]any)) > 0 {
		t.Fatalf("%s: %v", figure, at(t, v, "obstacles"))
	}
	line := words(at(t, v, "command_line").(string))
	if epoch, ok := strings.CutPrefix(line[0], "SOURCE_DATE_EPOCH="); ok {
		t.Setenv("SOURCE_DATE_EPOCH", epoch)
		line = line[1:]
	}
	if line[0] != program {
		t.Fatalf("the command is %q", line)
	}
	if code, _, errText := run(line[1:]...); code != exitDone {
		t.Fatalf("%q: exit %d: %s", line, code, errText)
	}
	return line[len(line)-1]
}

// The command that a figure carries makes the same bytes, for every verb that
// draws and every format; the last run spells its flags differently, and its
// figure is the same.
func TestFiguresAreMadeAgain(t *testing.T) {
	t.Chdir(t.TempDir())
	writeFile(t, "rows of samples.csv", "name,Di,Ab,An\nA's,30,35,35\nB,60,10,30\n")
	f, err := systems.Builtin("di-an-fo")
	if err != nil {
		t.Fatal(err)
	}
	writeFile(t, "own.toml", string(f.Raw()))
	writeFile(t, "the plan.toml", "system = \"di-ab-an\"\nsamples = \"rows of samples.csv\"\n[[panel]]\nkind = \"projection\"\n[[panel]]\nkind = \"section\"\nat_C = 1250\n")
	for i, args := range [][]string{
		{"liquidus", "--samples", "rows of samples.csv", "--isotherms", "1200,1250,", "--ink"},
		{"liquidus", "own.toml", "--without", "An", "--basis", "mol", "--shade", "temperature"},
		{"descend", "di-ab-an", "--bulk", "Di=30, Ab=35, An=35", "--remove", "1280:Pl", "--remove", "1230", "--style", "slides"},
		{"descend", "di-an-fo", "--mode=fractional", "--bulk=Di=50,An=35,Fo=15", "--width=90", "--quiet=true", "--svg-text=outlines", "--dpi=150"},
		{"melt", "di-an-fo", "--bulk", "Di=30,An=20,Fo=50", "--style", "single-84"},
		{"section", "di-ab-an", "--at", "1250", "--samples", "rows of samples.csv"},
		{"join", "di-ab-an", "--to", "An=100", "--from", "Ab=100", "--read", "An=50@1400", "--read=An=20@1300", "--style", "heavy-89"},
		{"pressure", "di-an-fo", "--to", "1.5", "--count", "4", "--without", "Fo", "--style", "single-84"},
	} {
		for _, ending := range figureFormats() {
			if ending != "pdf" && i > 3 {
				continue // the formats differ in their writers, not in their verbs
			}
			name := "fig " + string(rune('a'+i)) + "." + ending
			if code, _, errText := run(append(args, "--figure", name)...); code != exitDone {
				t.Fatalf("%q: exit %d: %s", args, code, errText)
			}
			want, err := os.ReadFile(name)
			if err != nil {
				t.Fatal(err)
			}
			got, err := os.ReadFile(again(t, name))
			if err != nil || !bytes.Equal(got, want) {
				t.Errorf("%q: made again, the %s differs (%v)", args, ending, err)
			}
		}
	}
}

func TestFigureWithADateIsMadeAgain(t *testing.T) {
	t.Chdir(t.TempDir())
	t.Setenv("SOURCE_DATE_EPOCH", "1000000000")
	if code, _, errText := run("liquidus", "di-an-fo", "--figure", "a.pdf"); code != exitDone {
		t.Fatal(errText)
	}
	want, _ := os.ReadFile("a.pdf")
	t.Setenv("SOURCE_DATE_EPOCH", "")
	if got, _ := os.ReadFile(again(t, "a.pdf")); !bytes.Equal(got, want) {
		t.Error("the figure differs")
	}
}

// Flags in another order and spelling, and those that say what is the case
// anyway, make the same file; so does a table of samples under an absolute path.
func TestOneSpellingOfCommands(t *testing.T) {
	t.Chdir(t.TempDir())
	writeFile(t, "rows.csv", "name,Di,Ab,An\nA,30,35,35\n")
	here, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	var want []byte
	for _, args := range [][]string{
		{"liquidus", "--samples", "rows.csv", "--basis", "mol", "--figure", "a.svg"},
		{"liquidus", "--figure", "b.svg", "--basis=mol", "di-ab-an", "--samples=rows.csv", "--format", "csv", "--style", "double-174", "--dpi", "600"},
		{"liquidus", "di-ab-an", "--figure", "c.svg", "--basis=mol", "--samples", here + "/rows.csv", "--isotherms", "auto", "--quiet"},
	} {
		if code, _, errText := run(args...); code != exitDone {
			t.Fatalf("%q: %s", args, errText)
		}
		for _, a := range args {
			if !strings.HasSuffix(a, ".svg") {
				continue
			}
			got, err := os.ReadFile(a)
			if err != nil {
				t.Fatal(err)
			}
			if want == nil {
				want = got
			}
			if !bytes.Equal(got, want) {
				t.Errorf("%q gives another file", args)
			}
			if bytes.Contains(got, []byte(here)) {
				t.Errorf("%q: the figure tells the name of a folder", args)
			}
		}
	}
}

func TestShowSaysWhatChanged(t *testing.T) {
	t.Chdir(t.TempDir())
	f, err := systems.Builtin(defaultSystem)
	if err != nil {
		t.Fatal(err)
	}
	raw := string(f.Raw())
	writeFile(t, "own.toml", raw)
	writeFile(t, "rows.csv", "name,Di,Ab,An\nA,30,35,35\n")
	if code, _, errText := run("liquidus", "own.toml", "--samples", "rows.csv", "--figure", "a.pdf"); code != exitDone {
		t.Fatal(errText)
	}
	state := func() (string, string) {
		code, out, errText := run("show", "a.pdf")
		if code != exitDone {
			t.Fatal(errText)
		}
		_, out2, _ := run("show", "a.pdf", "--format", "csv")
		return out, out2
	}
	text, table := state()
	for _, want := range []string{"own.toml: unchanged", "rows.csv: unchanged", f.SHA256(), "thalweg liquidus own.toml --samples rows.csv --figure a-again.pdf"} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	if strings.Contains(table, "obstacle") {
		t.Errorf("obstacles in\n%s", table)
	}
	writeFile(t, "own.toml", raw+"\n# a remark\n")
	writeFile(t, "rows.csv", "name,Di,Ab,An\nA,31,34,35\n")
	text, table = state()
	for _, want := range []string{"own.toml: CHANGED since", "rows.csv: CHANGED since", "may not give the same bytes"} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	if strings.Count(table, "\nobstacle") != 2 {
		t.Errorf("not two obstacles in\n%s", table)
	}
	os.Remove("rows.csv")
	writeFile(t, "own.toml", "no system")
	text, _ = state()
	for _, want := range []string{"rows.csv: NOT FOUND here", "own.toml: CANNOT BE READ here"} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
}

// A built-in system that another version of the program had, and a file that is
// gone, are said to be missing.
func TestShowSaysWhatIsMissing(t *testing.T) {
	t.Chdir(t.TempDir())
	for _, name := range []string{"an-old-system", "gone.toml", "../gone/too.toml"} {
		if h := holdInput(render.Input{Kind: "system", Name: name, SHA256: strings.Repeat("0", 64)}); h.state != "missing" {
			t.Errorf("%s is %s (%s)", name, h.state, h.why)
		}
	}
}

// A figure from elsewhere cannot propose what this program would not record.
func TestForeignCommandsAreNamed(t *testing.T) {
	e := newEnv(&bytes.Buffer{}, &bytes.Buffer{})
	for _, args := range [][]string{
		{"liquidus", "di-ab-an", "--output", "precious.txt"},
		{"liquidus", "di-ab-an", "--figure", "precious.pdf"},
		{"liquidus", "--colour-of-the-year"},
		{"systems"}, {"show", "di-ab-an"}, {"rm", "precious.txt"}, {"--help"},
	} {
		if e.unknownCommand(args) == "" {
			t.Errorf("%q passes", args)
		}
	}
	if why := e.unknownCommand([]string{"liquidus", "di-ab-an", "--ink"}); why != "" {
		t.Errorf("a good command does not pass: %s", why)
	}
}

// Lists survive the way from the command line into the figure and back, also
// those whose items hold commas.
func TestListsInCommands(t *testing.T) {
	parsed := func(args []string) ([]string, []string) {
		cmd := NewCmdLiquidus(newEnv(&bytes.Buffer{}, &bytes.Buffer{}), nil)
		if err := cmd.Flags().Parse(args); err != nil {
			t.Fatal(err)
		}
		list, err := cmd.Flags().GetStringSlice("without")
		if err != nil {
			t.Fatal(err)
		}
		return list, command(cmd, &subject{given: defaultSystem}, "pdf")
	}
	want, args := parsed([]string{"--without", `Fo,"a,b"`, "--without", `"say ""c"""`})
	if len(want) != 3 {
		t.Fatalf("%q", want)
	}
	if got, _ := parsed(args[2:]); !slices.Equal(got, want) {
		t.Errorf("%q became %q by %q", want, got, args)
	}
}

func TestShowSaysThatTheVersionDiffers(t *testing.T) {
	t.Chdir(t.TempDir())
	var out bytes.Buffer
	e := newEnv(&out, &bytes.Buffer{})
	e.version = "v9.9.9"
	if code := execute(NewCmdRoot(e), e, []string{"liquidus", "di-an-fo", "--figure", "a.svg"}); code != exitDone {
		t.Fatal(code)
	}
	out.Reset()
	if execute(NewCmdRoot(e), e, []string{"show", "a.svg"}); !strings.Contains(out.String(), "Program, system and files are those it was made with") {
		t.Errorf("the same version:\n%s", out.String())
	}
	out.Reset()
	e.version = "v9.9.10"
	if execute(NewCmdRoot(e), e, []string{"show", "a.svg"}); !strings.Contains(out.String(), "made by version v9.9.9, this is v9.9.10") {
		t.Errorf("another version:\n%s", out.String())
	}
}

func TestShowRefuses(t *testing.T) {
	t.Chdir(t.TempDir())
	if code, _, errText := run("liquidus", "di-an-fo", "--figure", "a.pdf"); code != exitDone {
		t.Fatal(errText)
	}
	whole, _ := os.ReadFile("a.pdf")
	writeFile(t, "short.pdf", string(whole[:len(whole)/2]))
	writeFile(t, "other.pdf", "%PDF-1.4\n1 0 obj\n<< >>\nendobj\n%%EOF\n")
	writeFile(t, "empty.svg", "")
	writeFile(t, "torn.svg", "<svg><g></svg>")
	writeFile(t, "text.png", "not a picture")
	if err := os.Mkdir("folder.svg", 0o777); err != nil {
		t.Fatal(err)
	}
	huge, err := os.Create("huge.png")
	if err != nil {
		t.Fatal(err)
	}
	if err := huge.Truncate(largestFigure + 1); err != nil { // a hole: it takes no room
		t.Fatal(err)
	}
	huge.Close()
	for name, want := range map[string][2]string{
		"short.pdf":  {"damaged", "take another copy"},
		"other.pdf":  {"holds no record", "another program"},
		"empty.svg":  {"no figure", "name a figure"},
		"torn.svg":   {"damaged", "take another copy"},
		"text.png":   {"no figure", "name a figure"},
		"folder.svg": {"not an ordinary file", "name a figure"},
		"huge.png":   {"larger than 64 MiB", "right file"},
		"absent.pdf": {"no such file", "check the path"},
	} {
		code, out, errText := run("show", name)
		if code != exitUsage || out != "" || !strings.Contains(errText, want[0]) || !strings.Contains(errText, want[1]) || !strings.Contains(errText, name) {
			t.Errorf("%s: exit %d, %q, %q", name, code, out, errText)
		}
	}
	// a word changed in the file shows
	if err := os.WriteFile("touched.pdf", bytes.Replace(whole, []byte("/Placement /Block"), []byte("/Placement /Start"), 1), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, out, _ := run("show", "touched.pdf"); !strings.Contains(out, "itself was changed") {
		t.Errorf("a changed file passes:\n%s", out)
	}
}
