package cell

import (
	"go/types"
	"reflect"
	"sort"
	"strings"
	"unicode/utf8"
)

// Name is a name of the notebook, with its type, its unit ("" for none) and its value in words.
type Name struct {
	Name, Type, Unit, Value string
	Cell                    int // that declared it
}

// Names lists what the notebook has declared: variables with their values, functions and types, in the order of the
// cells. Call it from within the running cell, of whose own names it lists those that are set.
func (s *Session) Names() []Name {
	m := s.markNow()
	line := 0
	if m.src == s.src && s.src != nil {
		line, _ = m.src.place(m.off)
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	var list []*live
	for _, l := range s.scope.names {
		if s.src != nil && l.cell == s.src.cell && line > 0 && l.line >= line {
			continue
		}
		list = append(list, l)
	}
	sort.Slice(list, func(i, j int) bool {
		a, b := list[i], list[j]
		if a.cell != b.cell {
			return a.cell < b.cell
		}
		if a.line != b.line {
			return a.line < b.line
		}
		return a.name < b.name
	})
	out := make([]Name, len(list))
	for i, l := range list {
		out[i] = s.named(l)
	}
	return out
}

// named describes one name.
func (s *Session) named(l *live) Name {
	n := Name{Name: l.name, Type: shortType(l.obj.Type()), Cell: l.cell}
	switch o := l.obj.(type) {
	case *types.TypeName:
		n.Type = "type"
	case *types.Const:
		n.Value = o.Val().String()
		n.Unit = s.unitOf(o)
	case *types.Func:
		if t, ok := s.result(o); ok {
			n.Unit = t
		}
	case *types.Var:
		n.Unit = s.unitOf(o)
		v, err := s.machine.value(l.lowered)
		if err != nil {
			return n
		}
		text := "?"
		if n.Unit != "?" {
			text = n.Unit
		}
		n.Value = oneLine(s.writer().Text(v, static{o.Type()}, strings.TrimPrefix(text, "?"), false))
		if n.Unit == "?" && reflectsNumber(v) {
			n.Unit = "not traced"
		} else if n.Unit == "?" || strings.HasPrefix(n.Unit, "{") {
			n.Unit = ""
		}
	}
	return n
}

func reflectsNumber(v reflect.Value) bool {
	return v.IsValid() && (v.Kind() == reflect.Float64 || v.Kind() == reflect.Slice && v.Type().Elem().Kind() == reflect.Float64)
}

// unitOf gives the unit text of a name; "" where units are not checked.
func (s *Session) unitOf(o types.Object) string {
	if s.units == nil {
		return ""
	}
	return strings.TrimSuffix(s.units.Of(o), "#")
}

// result gives the unit text of what a function gives, if its type says one.
func (s *Session) result(o types.Object) (string, bool) {
	sig, ok := o.Type().(*types.Signature)
	if !ok || s.units == nil || sig.Results().Len() != 1 {
		return "", false
	}
	return s.units.Written(sig.Results().At(0).Type())
}

const widest = 60 // characters of a value in a list of names

// oneLine gives the beginning of a text on one line.
func oneLine(text string) string {
	text = strings.Join(strings.Fields(text), " ")
	if utf8.RuneCountInString(text) > widest {
		text = string([]rune(text)[:widest-2]) + ".."
	}
	return text
}

// Help explains a name as a MIME bundle.
func (s *Session) Help(name string) (data map[string]any, ok bool) {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.describe(name)
}
