package cell

import (
	"go/token"
	"reflect"
)

// File sets keep the line tables of every text that was ever parsed. Those that nobody asks for any more are taken out.

// keptTexts is how many cells back [Session.Lowered] can look.
const keptTexts = 200

// forgetFiles lets go of the files of cells but those with live functions, which are checked again when what they use
// changes, and of all that the interpreter has parsed.
func (s *Session) forgetFiles() {
	live := map[*token.File]bool{}
	keep := func(f *function) {
		if f != nil && f.src != nil {
			for _, file := range f.src.files {
				live[file] = true
			}
		}
	}
	for _, l := range s.scope.names {
		keep(l.fn)
	}
	for _, m := range s.methods {
		keep(m.function)
	}
	removeFiles(s.fset, live)
	if len(s.generic) > 0 {
		delete(s.texts, s.now.Number-keptTexts)
		return // the interpreter asks for the file of generic code each time that it gets new types
	}
	if f, ok := field(reflect.ValueOf(s.machine.i).Elem(), "fset", reflect.Pointer); ok {
		if fset, ok := f.Interface().(*token.FileSet); ok {
			removeFiles(fset, nil)
		}
	}
	delete(s.texts, s.now.Number-keptTexts)
}

func removeFiles(fset *token.FileSet, keep map[*token.File]bool) {
	var gone []*token.File
	fset.Iterate(func(f *token.File) bool {
		if !keep[f] {
			gone = append(gone, f)
		}
		return true
	})
	for _, f := range gone {
		fset.RemoveFile(f)
	}
}
