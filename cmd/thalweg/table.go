package main

import (
	"strings"
	"unicode/utf8"
)

// table is a text table. A column without any entry is left out.
type table struct {
	columns []column
	rows    [][]string
}

// column is headed by a name and, in a second line, its unit.
type column struct {
	head, unit string
	left       bool // set flush left; numbers stand flush right
}

func (t *table) row(cells ...string) { t.rows = append(t.rows, cells) }

// write sets the table, indented by two spaces.
func (t *table) write(b *strings.Builder) {
	widths := make([]int, len(t.columns))
	used := make([]bool, len(t.columns))
	heads, units := make([]string, len(t.columns)), make([]string, len(t.columns))
	anyUnit := false
	for i, c := range t.columns {
		for _, r := range t.rows {
			used[i] = used[i] || i < len(r) && r[i] != ""
		}
		if !used[i] {
			continue
		}
		heads[i], units[i] = c.head, c.unit
		anyUnit = anyUnit || c.unit != ""
		widths[i] = max(runes(c.head), runes(c.unit))
		for _, r := range t.rows {
			if i < len(r) {
				widths[i] = max(widths[i], runes(r[i]))
			}
		}
	}
	t.line(b, widths, used, heads)
	if anyUnit {
		t.line(b, widths, used, units)
	}
	for _, r := range t.rows {
		t.line(b, widths, used, r)
	}
}

func (t *table) line(b *strings.Builder, widths []int, used []bool, cells []string) {
	var l strings.Builder
	for i, c := range cells {
		if !used[i] {
			continue
		}
		l.WriteString("  ")
		pad := strings.Repeat(" ", max(0, widths[i]-runes(c)))
		if t.columns[i].left {
			l.WriteString(c + pad)
		} else {
			l.WriteString(pad + c)
		}
	}
	b.WriteString(strings.TrimRight(l.String(), " ") + "\n")
}

func runes(s string) int { return utf8.RuneCountInString(s) }

// textWidth is the width of running text in columns.
const textWidth = 88

// wrap sets running text with a first prefix and spaces of the same width below
// it.
func wrap(b *strings.Builder, prefix, text string) {
	indent := strings.Repeat(" ", runes(prefix))
	line := prefix
	empty := true
	for _, word := range strings.Fields(text) {
		if !empty && runes(line)+1+runes(word) > textWidth {
			b.WriteString(strings.TrimRight(line, " ") + "\n")
			line, empty = indent, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	b.WriteString(strings.TrimRight(line, " ") + "\n")
}
