package cell

import (
	"fmt"
	"go/types"
	"reflect"
)

// At run time a value of a cell's type has no methods that compiled code could find. What fmt and errors ask for is
// kept beside it: the methods Error, String, Unwrap and Is of each type of a cell.

// abilities are the methods of a cell's type that compiled code asks for.
type abilities struct {
	text   func(v any) string
	unwrap func(v any) error
	is     func(v any, target error) bool
}

// ability finds the methods of a type: by its name as declared and whether it is a pointer to it.
type ability struct {
	name    *types.TypeName
	pointer bool
}

// worded is a value of a cell's type with its methods. Two of them are equal if the values are.
type worded struct {
	value any
	*abilities
}

// Format writes the text where a text is asked for, the bare value elsewhere.
func (w worded) Format(f fmt.State, verb rune) {
	switch verb {
	case 'v', 's', 'q':
		if !f.Flag('#') {
			if verb == 'v' {
				verb = 's'
			}
			fmt.Fprintf(f, fmt.FormatString(f, verb), w.text(w.value))
			return
		}
	}
	fmt.Fprintf(f, fmt.FormatString(f, verb), w.value)
}

// Error makes a cell's error one for compiled code too.
func (w worded) Error() string { return w.text(w.value) }

// Unwrap gives the error behind the value, if the type tells it.
func (w worded) Unwrap() error {
	if w.unwrap == nil {
		return nil
	}
	return w.unwrap(w.value)
}

// Is asks the type itself whether it counts as another error.
func (w worded) Is(target error) bool { return w.is != nil && w.is(w.value, target) }

// bare takes the methods off a value again.
func bare(v any) any {
	if w, ok := v.(worded); ok {
		return w.value
	}
	return v
}

// able registers the methods of the k-th type that has any; zero tells its type at run time.
func (s *Session) able(k int, zero any) *abilities {
	s.mu.Lock()
	defer s.mu.Unlock()
	for len(s.abilities) <= k {
		s.abilities = append(s.abilities, &abilities{})
	}
	if t := reflect.TypeOf(zero); t != nil && (t.Kind() == reflect.Struct || t.Kind() == reflect.Pointer) {
		s.byType[t] = s.abilities[k]
	}
	return s.abilities[k]
}

func (s *Session) ableAt(k int) *abilities {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.abilities[k]
}

// ofType gives the methods of a type that a value has at run time.
func (s *Session) ofType(t reflect.Type) *abilities {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.byType[t]
}

// ofName gives the methods of a type by its lowered name.
func (s *Session) ofName(name string) *abilities {
	s.mu.Lock()
	defer s.mu.Unlock()
	for o, lowered := range s.typeNames {
		if lowered == name && name != "" {
			if k, ok := s.ableIndex[ability{o, false}]; ok && k < len(s.abilities) {
				return s.abilities[k]
			}
		}
	}
	return nil
}

// ofStatic gives the methods of a static type.
func (s *Session) ofStatic(t types.Type) *abilities {
	s.mu.Lock()
	defer s.mu.Unlock()
	if k, ok := s.ableIndex[abilityOf(t)]; ok && k < len(s.abilities) {
		return s.abilities[k]
	}
	return nil
}

func abilityOf(t types.Type) ability {
	t = types.Unalias(t)
	p, pointer := t.(*types.Pointer)
	if pointer {
		t = types.Unalias(p.Elem())
	}
	if n, ok := t.(*types.Named); ok {
		return ability{n.Obj(), pointer}
	}
	return ability{}
}
