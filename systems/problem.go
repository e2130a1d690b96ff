package systems

import (
	"fmt"
	"sort"
	"strings"
)

// Problem is one thing that is wrong with a system file.
type Problem struct {
	File   string // as the user named it
	Line   int    // 1 is the first; 0 when the problem is the file as a whole
	Column int    // in characters, 1 is the first
	Key    string // dotted, for example solid.melting.T_C; may be empty
	Reason string // what is wrong
	Remedy string // what to do about it
}

// String is one line: file:line:column: key: reason; remedy.
func (p Problem) String() string {
	var b strings.Builder
	b.WriteString(p.File)
	if p.Line > 0 {
		fmt.Fprintf(&b, ":%d:%d", p.Line, p.Column)
	}
	b.WriteString(": ")
	if p.Key != "" {
		b.WriteString(p.Key + ": ")
	}
	b.WriteString(p.Reason)
	if p.Remedy != "" {
		b.WriteString("; " + p.Remedy)
	}
	return b.String()
}

// FileError holds every problem of one system file, in the order of its lines.
type FileError struct{ Problems []Problem }

// maxListed is how many problems Error prints: the rest is seen on the next try.
const maxListed = 50

// Error lists the problems, one a line, the first fifty of them.
func (e *FileError) Error() string {
	var lines []string
	for i, p := range e.Problems {
		if i == maxListed {
			lines = append(lines, fmt.Sprintf("and %d more", len(e.Problems)-i))
			break
		}
		lines = append(lines, p.String())
	}
	return strings.Join(lines, "\n")
}

// wholeFile is the error of a file that cannot be read at all.
func wholeFile(file, reason, remedy string) *FileError {
	return &FileError{[]Problem{{File: file, Reason: reason, Remedy: remedy}}}
}

// report gathers problems while a file is checked.
type report struct {
	file     string
	index    *index
	problems []Problem
}

// add notes a problem at the key with this path, or at the nearest table above
// it when the key is missing.
func (r *report) add(path, reason, remedy string) {
	line, column := r.index.place(path)
	r.problems = append(r.problems, Problem{r.file, line, column, plainKey(path), reason, remedy})
}

// err returns the problems sorted by place, nil if there are none.
func (r *report) err() error {
	if len(r.problems) == 0 {
		return nil
	}
	sort.SliceStable(r.problems, func(i, j int) bool {
		a, b := r.problems[i], r.problems[j]
		if a.Line != b.Line {
			return a.Line < b.Line
		}
		if a.Column != b.Column {
			return a.Column < b.Column
		}
		return a.Key < b.Key
	})
	return &FileError{r.problems}
}
