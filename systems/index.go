package systems

import (
	"fmt"
	"regexp"
	"sort"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2/unstable"
)

// index knows where every key of a TOML document stands and what kind of value
// it has, so that a problem of meaning can name its line and column as a problem
// of syntax does. A path is dotted, with the element of an array in brackets:
// solid[1].member[0].melting.T_C.
type index struct {
	data    []byte
	offsets map[string]int // path → byte offset of the key
	entries []entry        // in the order of the document
	lines   []int          // byte offset of the start of each line
	tables  map[string]int // path of an array of tables → elements so far
}

// entry is one key, table header or array element.
type entry struct {
	path string
	kind unstable.Kind
}

// maxDepth bounds the keys of a path and the nesting of values that are indexed.
// The deepest known key has five; anything beyond is an unknown key or a wrong
// value, reported where it begins.
const maxDepth = 8

// newIndex walks over the document. On a syntax error the index holds what
// stands before it; the decoder reports the error.
func newIndex(data []byte) *index {
	ix := &index{data: data, offsets: map[string]int{}, tables: map[string]int{}}
	ix.lines = []int{0}
	for i, b := range data {
		if b == '\n' {
			ix.lines = append(ix.lines, i+1)
		}
	}
	var p unstable.Parser
	p.Reset(data)
	prefix := ""
	for p.NextExpression() {
		e := p.Expression()
		switch e.Kind {
		case unstable.Table, unstable.ArrayTable:
			prefix = ix.header(e)
		case unstable.KeyValue:
			ix.keyValue(prefix, e)
		}
	}
	return ix
}

// header enters [a.b] or [[a.b]] and returns its path.
func (ix *index) header(e *unstable.Node) string {
	path := ""
	for it, depth := e.Key(), 0; it.Next() && depth < maxDepth; depth++ {
		key := it.Node()
		path = join(path, string(key.Data))
		offset := int(key.Raw.Offset)
		n := ix.tables[path]
		switch {
		case it.IsLast() && e.Kind == unstable.ArrayTable:
			ix.enter(path, offset, unstable.ArrayTable)
			ix.tables[path]++
			path = fmt.Sprintf("%s[%d]", path, n)
			ix.enter(path, offset, unstable.ArrayTable)
		case n > 0:
			path = fmt.Sprintf("%s[%d]", path, n-1)
		default:
			ix.enter(path, offset, unstable.Table)
		}
	}
	return path
}

// keyValue enters a key, dotted or not, and what its value contains.
func (ix *index) keyValue(prefix string, e *unstable.Node) {
	path := prefix
	offset := 0
	for it, depth := e.Key(), 0; it.Next() && depth < maxDepth; depth++ {
		key := it.Node()
		path = join(path, string(key.Data))
		offset = int(key.Raw.Offset)
		if !it.IsLast() {
			ix.enter(path, offset, unstable.Table)
		}
	}
	ix.value(path, offset, e.Value())
}

// value enters a value and, for an array or inline table, its content. An
// element of an array stands where the array's key stands.
func (ix *index) value(path string, offset int, v *unstable.Node) {
	ix.enter(path, offset, v.Kind)
	if strings.Count(path, ".")+strings.Count(path, "[") >= 2*maxDepth {
		return
	}
	switch v.Kind {
	case unstable.InlineTable:
		for it := v.Children(); it.Next(); {
			if it.Node().Kind == unstable.KeyValue {
				ix.keyValue(path, it.Node())
			}
		}
	case unstable.Array:
		n := 0
		for it := v.Children(); it.Next(); n++ {
			ix.value(fmt.Sprintf("%s[%d]", path, n), offset, it.Node())
		}
	}
}

func (ix *index) enter(path string, offset int, kind unstable.Kind) {
	if _, known := ix.offsets[path]; known {
		return
	}
	ix.offsets[path] = offset
	ix.entries = append(ix.entries, entry{path, kind})
}

// has reports whether the document holds this path.
func (ix *index) has(path string) bool {
	_, ok := ix.offsets[path]
	return ok
}

// place returns the line and column of a path, or of the nearest one above it
// that the document holds; the top of the file if there is none.
func (ix *index) place(path string) (line, column int) {
	for p := path; p != ""; p = parent(p) {
		if offset, ok := ix.offsets[p]; ok {
			return ix.position(offset)
		}
	}
	return 1, 1
}

// position turns a byte offset into a line and a column in characters.
func (ix *index) position(offset int) (line, column int) {
	line = sort.SearchInts(ix.lines, offset+1) // lines that start at or before offset
	start := ix.lines[line-1]
	return line, utf8.RuneCount(ix.data[start:min(offset, len(ix.data))]) + 1
}

func join(prefix, key string) string {
	if prefix == "" {
		return key
	}
	return prefix + "." + key
}

// parent drops the last key or the last [element] of a path.
func parent(path string) string {
	i := strings.LastIndexAny(path, ".[")
	if i < 0 {
		return ""
	}
	return path[:i]
}

var element = regexp.MustCompile(`\[[0-9]+\]`)

// plainKey is a path without the numbers of its elements.
func plainKey(path string) string { return element.ReplaceAllString(path, "") }
