package cell

import (
	"go/token"
	"go/types"
	"sort"
	"strings"
)

// sortedKeys gives the keys of a map in order.
func sortedKeys[V any](m map[string]V) []string {
	keys := make([]string, 0, len(m))
	for k := range m {
		keys = append(keys, k)
	}
	sort.Strings(keys)
	return keys
}

// shortType writes a type without packages, as messages and signatures do.
func shortType(t types.Type) string {
	return types.TypeString(t, func(p *types.Package) string {
		if p.Path() == mainPath || strings.Contains(p.Path(), "/") && p.Name() != "cmplx" && p.Name() != "rand" {
			return ""
		}
		return p.Name()
	})
}

// members lists the fields and methods of a type that a user may name.
func members(t types.Type) []types.Object {
	var out []types.Object
	seen := map[string]bool{}
	add := func(o types.Object) {
		local := o.Pkg() != nil && o.Pkg().Path() == mainPath
		if seen[o.Name()] || !token.IsExported(o.Name()) && !local || hiddenMember(o) {
			return
		}
		seen[o.Name()] = true
		out = append(out, o)
	}
	ms := types.NewMethodSet(pointerTo(t))
	for i := 0; i < ms.Len(); i++ {
		add(ms.At(i).Obj())
	}
	if s, ok := deref(t).Underlying().(*types.Struct); ok {
		for i := 0; i < s.NumFields(); i++ {
			add(s.Field(i))
		}
	}
	return out
}

// pointerTo gives the type whose methods a variable of type t has.
func pointerTo(t types.Type) types.Type {
	if _, ok := types.Unalias(t).(*types.Pointer); ok || types.IsInterface(t) {
		return t
	}
	return types.NewPointer(t)
}

// hiddenMember tells whether a method is for the notebook's own use.
func hiddenMember(o types.Object) bool {
	if _, ok := o.(*types.Func); !ok || !foreign(o) {
		return false
	}
	switch o.Name() {
	case "MIMEBundle", "String", "Error", "CodeName", "GoString", "Format", "Completions":
		return true
	}
	return strings.HasSuffix(o.Name(), twinSuffix)
}
