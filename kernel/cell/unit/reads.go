package unit

import "go/types"

// readers tells which functions, and variables that hold functions, read a variable or call a function: read object ->
// those that read it. What was inferred of their results falls with the unit of what they read.
type readers map[types.Object]map[types.Object]bool

// add notes that by reads obj.
func (r readers) add(obj, by types.Object) {
	if r[obj] == nil {
		r[obj] = map[types.Object]bool{}
	}
	r[obj][by] = true
}

// drop forgets an object that has no name any more.
func (r readers) drop(obj types.Object) {
	delete(r, obj)
	for _, by := range r {
		delete(by, obj)
	}
}

// anyLiteral stands for the function literals of a cell, which are held by whatever variables of the cell hold functions.
var anyLiteral types.Object = types.NewVar(0, nil, "func", types.Typ[types.Invalid])

// note notes, in the last pass, that the function being passed over reads an object.
func (in *inference) note(obj types.Object) {
	if !in.final {
		return
	}
	for _, f := range in.funcs {
		switch of := f.of.(type) {
		case *types.Func:
			in.reads.add(obj, of)
		default:
			if f.inner {
				in.reads.add(obj, anyLiteral)
			}
		}
	}
}

// doubt makes the results of functions of earlier cells untraced where a variable that they read is now in another
// unit, and remembers what the cell's own functions read.
func (r *Report) doubt() {
	c := r.checker
	for key, v := range r.in.env {
		obj, ok := key.(types.Object)
		if !ok || !r.in.defined[obj] {
			continue
		}
		if old, ok := c.kept[obj]; ok && (old.kind != v.kind || old.dim != v.dim) {
			c.spread(obj, map[types.Object]bool{})
		}
	}
	held := r.holders()
	for obj, by := range r.in.reads {
		if !r.lasting(obj) {
			continue
		}
		for reader := range by {
			if reader != anyLiteral {
				c.reads.add(obj, reader)
				continue
			}
			for _, h := range held {
				c.reads.add(obj, h)
			}
		}
	}
}

// holders lists the variables of the cell that hold functions.
func (r *Report) holders() []types.Object {
	var held []types.Object
	for key := range r.in.env {
		obj, ok := key.(types.Object)
		if !ok || !r.lasting(obj) {
			continue
		}
		if _, ok := obj.Type().Underlying().(*types.Signature); ok {
			held = append(held, obj)
		}
	}
	return held
}

// spread makes untraced what rests on an object.
func (c *Checker) spread(obj types.Object, seen map[types.Object]bool) {
	if seen[obj] {
		return
	}
	seen[obj] = true
	for by := range c.reads[obj] {
		if fn, ok := by.(*types.Func); ok {
			for i := range fn.Signature().Results().Len() {
				if _, ok := c.kept[result{fn, i}]; ok {
					c.kept[result{fn, i}] = lost
				}
			}
		} else if _, ok := c.kept[by]; ok {
			c.kept[by] = lost
		}
		c.spread(by, seen)
	}
}
