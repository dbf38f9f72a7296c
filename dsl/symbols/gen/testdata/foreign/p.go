// Package foreign reaches types of a package outside the table.
package foreign

import "ampturn/dsl/symbols/gen/testdata/far"

// Failure has an alias, its field's type has none.
type Failure = far.Failure

// Inner gives a type that has no alias.
func Inner() map[string]*far.Inner { return nil }

// Wrapped has a field of it.
type Wrapped struct{ In []far.Inner }

// Do has a parameter of it.
func (Wrapped) Do(f func(far.Code)) {}
