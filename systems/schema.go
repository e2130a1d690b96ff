package systems

import (
	"fmt"
	"reflect"
	"sort"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// form is what a key of a system file may hold.
type form int

const (
	aNumber form = iota
	anInteger
	aText
	aBool
	texts   // array of strings
	numbers // array of numbers
	aTable
	tables // array of tables
)

var formNames = map[form]string{
	aNumber: "a number", anInteger: "a whole number", aText: "a text in quotes", aBool: "true or false",
	texts: "a list of texts", numbers: "a list of numbers", aTable: "a table", tables: "a list of tables",
}

// schema maps the plain key of everything a file may hold to its form. It is read
// off the wire types.
type schema map[string]form

// systemSchema is that of a system file.
var systemSchema = newSchema(reflect.TypeFor[wireFile]())

func newSchema(t reflect.Type) schema {
	out := schema{}
	describe(t, "", out)
	return out
}

func describe(t reflect.Type, prefix string, out schema) {
	for i := 0; i < t.NumField(); i++ {
		f := t.Field(i)
		if f.Anonymous {
			describe(f.Type, prefix, out)
			continue
		}
		key := join(prefix, f.Tag.Get("toml"))
		ft := f.Type
		if ft.Kind() == reflect.Pointer {
			ft = ft.Elem()
		}
		switch {
		case ft.Kind() == reflect.Struct:
			out[key] = aTable
			describe(ft, key, out)
		case ft.Kind() == reflect.Slice && ft.Elem().Kind() == reflect.Struct:
			out[key] = tables
			describe(ft.Elem(), key, out)
		default:
			out[key] = scalarForms[ft]
		}
	}
}

var scalarForms = map[reflect.Type]form{
	reflect.TypeFor[float64]():   aNumber,
	reflect.TypeFor[int]():       anInteger,
	reflect.TypeFor[string]():    aText,
	reflect.TypeFor[bool]():      aBool,
	reflect.TypeFor[[]string]():  texts,
	reflect.TypeFor[[]float64](): numbers,
}

// checkSchema reports every unknown key and every value of the wrong form, and
// whether the forms are good enough to decode.
func checkSchema(r *report, schema schema) (decodable bool) {
	decodable = true
	for _, e := range r.index.entries {
		key := plainKey(e.path)
		want, known := schema[key]
		isElement := strings.HasSuffix(e.path, "]")
		if !known {
			if isElement {
				continue // its list has been reported
			}
			above := plainKey(parent(key))
			if _, ok := schema[above]; ok || above == "" {
				r.add(e.path, "this key is unknown", schema.remedyUnknown(key))
			}
			continue
		}
		if !fits(e.kind, want, isElement) {
			if isElement {
				r.add(e.path, fmt.Sprintf("an element is %s", kindName(e.kind)), "give "+formNames[want])
			} else {
				r.add(e.path, fmt.Sprintf("this is %s", kindName(e.kind)), "give "+formNames[want])
			}
			decodable = false
		}
	}
	return decodable
}

// fits reports whether a value of this kind can stand for a form, or for one
// element of it.
func fits(kind unstable.Kind, want form, isElement bool) bool {
	number := kind == unstable.Integer || kind == unstable.Float
	switch want {
	case aNumber:
		return number
	case anInteger:
		return kind == unstable.Integer
	case aText:
		return kind == unstable.String
	case aBool:
		return kind == unstable.Bool
	case texts:
		return !isElement && kind == unstable.Array || isElement && kind == unstable.String
	case numbers:
		return !isElement && kind == unstable.Array || isElement && number
	case tables:
		return kind == unstable.ArrayTable || !isElement && kind == unstable.Array || isElement && kind == unstable.InlineTable
	default:
		return kind == unstable.Table || kind == unstable.InlineTable
	}
}

func kindName(k unstable.Kind) string {
	switch k {
	case unstable.String:
		return "a text"
	case unstable.Integer, unstable.Float:
		return "a number"
	case unstable.Bool:
		return "true or false"
	case unstable.Array:
		return "a list"
	case unstable.ArrayTable:
		return "a list of tables"
	case unstable.Table, unstable.InlineTable:
		return "a table"
	default:
		return "a date or time"
	}
}

// remedyUnknown says which keys the table has, the nearest first if one is near
// enough to be a slip or a wrong unit.
func (schema schema) remedyUnknown(key string) string {
	above := parent(key)
	var known []string
	for k := range schema {
		if parent(k) == above {
			known = append(known, strings.TrimPrefix(k, above+"."))
		}
	}
	sort.Strings(known)
	name := strings.TrimPrefix(key, above+".")
	if above == "" {
		name = key
	}
	stem, unit, _ := strings.Cut(name, "_")
	for _, k := range known {
		kStem, kUnit, _ := strings.Cut(k, "_")
		if kStem == stem && units[kUnit] && (units[unit] || otherUnits[unit]) {
			return "the unit is part of the key: convert the value and write " + k
		}
	}
	if near := nearest(name, known); len(near) > 0 {
		return "did you mean " + strings.Join(near, " or ") + "?"
	}
	return "this table may hold " + strings.Join(known, ", ")
}

// units are the endings of keys that carry a number; otherUnits are those that
// someone may write instead.
var (
	units      = map[string]bool{"C": true, "kJ": true, "J": true, "J_per_K": true, "cm3": true, "GPa": true, "C_per_GPa": true, "a_GPa": true}
	otherUnits = map[string]bool{
		"K": true, "F": true, "": true, "cal": true, "kcal": true, "eV": true, "J_per_mol": true, "kJ_per_mol": true,
		"kJ_per_K": true, "cal_per_K": true, "m3": true, "mm3": true, "Pa": true, "kPa": true, "MPa": true, "bar": true, "kbar": true, "atm": true,
		"K_per_GPa": true, "K_per_kbar": true, "C_per_kbar": true, "a_kbar": true,
	}
)
