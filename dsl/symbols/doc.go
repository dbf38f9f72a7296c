// Package symbols holds what the runner of cells must know of the packages that a cell can use: the vocabulary and a
// few packages of the standard library. It is generated in one pass from their sources, so that symbol table, export data
// and doc comments cannot disagree:
//
//   - [Symbols]: functions, constants, types and interface wrappers by package and name, for an interpreter;
//   - [Export]: export data by import path, for the type check of cells (golang.org/x/tools/go/gcexportdata);
//   - [Docs]: doc comments by "path.Name" and "path.Name.Member", for completion, inspection and help;
//   - [Aliases]: what the vocabulary calls types of other packages.
//
// After a change of the vocabulary run
//
//	go generate ./dsl/symbols
package symbols

//go:generate go run ./gen -out . -open ampturn/dsl fmt math math/cmplx math/rand strings strconv sort errors unicode bytes

import (
	"embed"
	"encoding/json"
	"fmt"
	"go/constant"
	"go/token"
	"path"
	"reflect"
	"strings"
	"sync"
)

// Symbols is the symbol table: "path/name" of a package, then the name of a symbol. A type is a nil pointer to it; an
// untyped constant is a constant.Value with its exact value; a wrapper of an interface has the name of the interface with "_" in front.
var Symbols = map[string]map[string]reflect.Value{}

// Aliases names the types of other packages that the vocabulary has an alias for: "path.Name" of the type to the
// name of the alias.
var Aliases = map[string]string{}

//go:embed export docs.json
var files embed.FS

// Export gives the export data of each package by its import path.
var Export = sync.OnceValue(func() map[string][]byte {
	all := map[string][]byte{}
	for key := range Symbols {
		data, err := files.ReadFile("export/pkg_" + strings.ReplaceAll(path.Dir(key), "/", "_") + "_symbols")
		if err != nil {
			panic(err) // embedded together with the table
		}
		all[path.Dir(key)] = data
	}
	return all
})

// Docs gives the doc comments by "path" of a package, "path.Name" and "path.Name.Member". Comments of the standard
// packages are cut to their first sentence.
var Docs = sync.OnceValue(func() map[string]string {
	text, err := files.ReadFile("docs.json")
	if err != nil {
		panic(err) // embedded
	}
	all := map[string]string{}
	if err := json.Unmarshal(text, &all); err != nil {
		panic(fmt.Errorf("docs.json: %w", err))
	}
	return all
})

// untypedString is an untyped string constant.
func untypedString(s string) reflect.Value { return reflect.ValueOf(constant.MakeString(s)) }

// untypedNumber is an untyped whole constant, or one too large or small for a ratio, which is written in binary ("0x1p+5").
func untypedNumber(text string) reflect.Value {
	kind := token.INT
	if strings.Contains(text, "p") {
		kind = token.FLOAT
	}
	return reflect.ValueOf(constant.MakeFromLiteral(text, kind, 0))
}

// untypedRatio is an untyped constant as a ratio of whole numbers.
func untypedRatio(num, den string) reflect.Value {
	n := constant.MakeFromLiteral(num, token.INT, 0)
	d := constant.MakeFromLiteral(den, token.INT, 0)
	return reflect.ValueOf(constant.ToFloat(constant.BinaryOp(n, token.QUO, d)))
}
