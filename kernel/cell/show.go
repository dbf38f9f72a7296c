package cell

import (
	"go/types"
	"maps"
	"math"
	"reflect"
	"strings"

	"ampturn/kernel"
	"ampturn/kernel/cell/nb"
)

// bundler is a value that shows itself. A nil bundle shows nothing.
type bundler interface{ MIMEBundle() map[string]any }

// measured is a value that carries its numbers in full beside its bundle.
type measured interface{ MIMEMetadata() map[string]any }

// showAt shows a value in the way that was noted when the cell was lowered.
func (s *Session) showAt(k int, v any) {
	how := s.shownAt(k)
	if b, ok := v.(bundler); ok && !isNilPointer(v) {
		var beside map[string]any
		if m, ok := v.(measured); ok {
			beside = m.MIMEMetadata()
		}
		s.show(k, b.MIMEBundle(), beside)
		return
	}
	beside := map[string]any{}
	if r := reflect.ValueOf(v); r.Kind() == reflect.Float64 && !math.IsNaN(r.Float()) && !math.IsInf(r.Float(), 0) {
		beside["ampturn"] = map[string]any{"value": r.Float(), "unit": strings.TrimPrefix(how.unit, "?")}
	}
	s.show(k, map[string]any{"text/plain": s.text(reflect.ValueOf(v), how.typ, how.unit, true)}, beside)
}

func isNilPointer(v any) bool {
	r := reflect.ValueOf(v)
	return r.Kind() == reflect.Pointer && r.IsNil()
}

func (s *Session) shownAt(k int) shown {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.shows[k]
}

func (s *Session) showBundle(k int, data map[string]any) { s.show(k, data, nil) }

// show sends what a value shows. Its metadata says under "ampturn" the expression as typed, and the numbers in full.
func (s *Session) show(k int, data, beside map[string]any) {
	if data == nil {
		return
	}
	if _, ok := data["text/plain"]; !ok {
		with := map[string]any{"text/plain": ""}
		for key, v := range data {
			with[key] = v
		}
		data = with
	}
	how, kind := s.shownAt(k), kernel.Display
	if how.top {
		kind = kernel.Result
	}
	own, _ := beside["ampturn"].(map[string]any)
	all := map[string]any{"expression": how.text}
	maps.Copy(all, own)
	meta := maps.Clone(beside)
	if meta == nil {
		meta = map[string]any{}
	}
	meta["ampturn"] = all
	s.Emit(kernel.Output{Kind: kind, Data: data, Metadata: meta})
}

func (s *Session) showText(k int, text string) {
	s.showBundle(k, map[string]any{"text/plain": text})
}

// showHelp shows what a name means.
func (s *Session) showHelp(name string) {
	s.mu.Lock()
	data, ok := s.describe(name)
	s.mu.Unlock()
	if ok {
		s.Emit(kernel.Output{Kind: kernel.Result, Data: data})
	}
}

// writer writes values as text.
func (s *Session) writer() nb.Writer { return nb.Writer{Format: s.voc.Format, Bare: unboxed} }

// text writes a value of a static type.
func (s *Session) text(v reflect.Value, t types.Type, unit string, top bool) string {
	return s.writer().Text(v, static{t}, unit, top)
}

// static is the static type of a value for its text.
type static struct{ t types.Type }

func (s static) Name() string { return shortType(s.t) }

func (s static) Named() bool {
	_, ok := types.Unalias(s.t).(*types.Named)
	return ok && !types.IsInterface(s.t)
}

func (s static) Own() bool    { return isCellType(s.t) }
func (s static) Struct() bool { return isStruct(s.t) }

func (s static) Elem() nb.Type {
	switch u := s.t.Underlying().(type) {
	case *types.Slice:
		return static{u.Elem()}
	case *types.Array:
		return static{u.Elem()}
	case *types.Map:
		return static{u.Elem()}
	case *types.Pointer:
		return static{u.Elem()}
	}
	return nb.Any
}

func (s static) Key() nb.Type {
	if m, ok := s.t.Underlying().(*types.Map); ok {
		return static{m.Key()}
	}
	return nb.Any
}

func (s static) Field(i int) (string, nb.Type, bool) {
	if st, ok := s.t.Underlying().(*types.Struct); ok && i < st.NumFields() {
		return st.Field(i).Name(), static{st.Field(i).Type()}, true
	}
	return "", nil, false
}
