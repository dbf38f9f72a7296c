package randcell

import "strings"

type kind int

const (
	intKind kind = iota
	floatKind
	stringKind
	boolKind
	sliceKind
	mapKind
	structKind
	pointerKind
	funcKind
	interfaceKind
	anyKind
)

// typ is a type of values in a notebook. Types are compared by their names in the reference, see same.
type typ struct {
	kind       kind
	key        *typ // of maps
	elem       *typ // of slices, maps, pointers
	params     []*typ
	results    []*typ
	name       string // of named types, in cells
	ref        string // in the reference
	fields     []field
	methods    []method
	members    []*typ // of interfaces: types made for it
	comparable bool
}

type field struct {
	name string
	typ  *typ
}

// method has one parameter and one result. Methods that change their receiver stand in statements of their own.
type method struct {
	name          string
	param, result *typ
	pointer       bool
	changes       bool
}

var (
	intType    = &typ{kind: intKind, comparable: true}
	floatType  = &typ{kind: floatKind, comparable: true}
	stringType = &typ{kind: stringKind, comparable: true}
	boolType   = &typ{kind: boolKind, comparable: true}
	intsType   = sliceOf(intType)
	floatsType = sliceOf(floatType)
	wordsType  = sliceOf(stringType)
	tallyType  = &typ{kind: mapKind, key: stringType, elem: intType}
	tableType  = &typ{kind: mapKind, key: intType, elem: floatType}
	intFunc    = &typ{kind: funcKind, params: []*typ{intType}, results: []*typ{intType}}
	floatFunc  = &typ{kind: funcKind, params: []*typ{floatType}, results: []*typ{floatType}}
	intMaker   = &typ{kind: funcKind, results: []*typ{intType}}

	plainTypes = []*typ{intType, floatType, stringType, boolType}
	listTypes  = []*typ{intsType, floatsType, wordsType, tallyType, tableType}
)

func sliceOf(t *typ) *typ   { return &typ{kind: sliceKind, elem: t} }
func pointerTo(t *typ) *typ { return &typ{kind: pointerKind, elem: t, comparable: true} }

// text writes the type as a draft.
func (t *typ) text() string {
	return t.write(func(n *typ) string { return nameOpen + n.name + nameEnd })
}

// refText writes the type for the reference, whatever its name stands for now.
func (t *typ) refText() string { return t.write(func(n *typ) string { return n.ref }) }

func (t *typ) write(named func(*typ) string) string {
	if t.name != "" {
		return named(t)
	}
	switch t.kind {
	case intKind:
		return "int"
	case floatKind:
		return "float64"
	case stringKind:
		return "string"
	case boolKind:
		return "bool"
	case anyKind:
		return "any"
	case sliceKind:
		return "[]" + t.elem.write(named)
	case mapKind:
		return "map[" + t.key.write(named) + "]" + t.elem.write(named)
	case pointerKind:
		return "*" + t.elem.write(named)
	}
	var params, results []string
	for _, p := range t.params {
		params = append(params, p.write(named))
	}
	for _, p := range t.results {
		results = append(results, p.write(named))
	}
	text := "func(" + strings.Join(params, ", ") + ")"
	switch len(results) {
	case 0:
	case 1:
		text += " " + results[0]
	default:
		text += " (" + strings.Join(results, ", ") + ")"
	}
	return text
}

func same(a, b *typ) bool { return a == b || a.refText() == b.refText() }

// names lists the named types in t.
func (t *typ) names() (out []*typ) {
	t.write(func(n *typ) string { out = append(out, n); return "" })
	return out
}
