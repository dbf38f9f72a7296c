package randcell

import (
	"fmt"
	"strconv"
	"strings"
)

// chunks are what a cell is made of, with how often each is taken.
var chunks = []struct {
	weight int
	write  func(*writer)
}{
	{10, (*writer).newVariable}, {8, (*writer).sameVariable}, {4, (*writer).otherVariable}, {3, (*writer).itself},
	{6, (*writer).newList}, {8, (*writer).statements}, {9, (*writer).newFunction}, {9, (*writer).sameFunction}, {3, (*writer).otherFunction},
	{6, (*writer).newStruct}, {3, (*writer).sameStruct}, {5, (*writer).structVariable}, {4, (*writer).changing},
	{5, (*writer).family}, {4, (*writer).interfaceVariable}, {4, (*writer).anySwitch},
	{5, (*writer).generic}, {4, (*writer).genericType}, {4, (*writer).outliving}, {6, (*writer).counter}, {4, (*writer).functionVariable}, {6, (*writer).wrapped},
	{7, (*writer).methodValue}, {5, (*writer).commaOK}, {5, (*writer).several}, {4, (*writer).variadic}, {7, (*writer).constants},
	{4, (*writer).sorting}, {6, (*writer).mapTour}, {4, (*writer).appending}, {7, (*writer).action}, {7, (*writer).shown}, {3, (*writer).parsed}, {3, (*writer).pointer},
	{3, (*writer).embedded}, {3, (*writer).array}, {3, (*writer).recursion}, {3, (*writer).copies}, {3, (*writer).mutual}, {2, (*writer).roleChange},
}

var totalWeight = func() (n int) {
	for _, c := range chunks {
		n += c.weight
	}
	return n
}()

func (w *writer) chunk() {
	n := w.IntN(totalWeight)
	for _, c := range chunks {
		if n -= c.weight; n < 0 {
			c.write(w)
			return
		}
	}
}

func (w *writer) newVariable() {
	w.count("variable")
	t := pick(w, plainTypes)
	w.set(w.fresh("v"), t, w.intoFloat(t, 3, "W1 declaration"))
}

// sameVariable declares a variable again with its own type: it stays the same variable.
func (w *writer) sameVariable() {
	all := w.redeclarable(func(e *entity) bool { return e.role == variable && e.typ.kind <= mapKind && w.nameable(e.typ) })
	if len(all) == 0 {
		w.newVariable()
		return
	}
	w.count("variable declared again, same type")
	e := pick(w, all)
	w.set(e.name, e.typ, w.value(e.typ, 2))
}

func (w *writer) otherVariable() {
	all := w.redeclarable(func(e *entity) bool {
		return e.role == variable && e.typ.kind <= boolKind && !w.inMethod(e.name) && !w.usedHere(e.name)
	})
	if len(all) == 0 {
		w.newVariable()
		return
	}
	e := pick(w, all)
	t := pick(w, append(append([]*typ{}, plainTypes...), listTypes...))
	if same(t, e.typ) {
		w.set(e.name, t, w.value(t, 2))
		return
	}
	w.count("variable declared again, other type")
	w.shun = e.name // functions that use it do not fit any more
	value := w.value(t, 2)
	w.shun = ""
	w.set(e.name, t, value)
}

// itself declares a variable again with another type, from its own value.
func (w *writer) itself() {
	all := w.redeclarable(func(e *entity) bool {
		return e.role == variable && (e.typ == intType || e.typ == floatType) && !w.inMethod(e.name)
	})
	if len(all) == 0 {
		return
	}
	e := pick(w, all)
	w.count("variable made from its earlier self")
	x := w.mark(e.name)
	switch w.IntN(3) {
	case 0:
		w.give([]string{e.name}, []*typ{stringType}, e.name+" := ", "fmt.Sprint("+x+")")
	case 1:
		w.give([]string{e.name}, []*typ{sliceOf(e.typ)}, e.name+" := ", "[]"+e.typ.text()+"{"+x+", "+w.value(e.typ, 0)+"}")
	default:
		w.give([]string{e.name}, []*typ{e.typ}, e.name+" := ", x+" + "+w.dynamic(e.typ, 1))
	}
}

func (w *writer) newList() {
	t := pick(w, listTypes)
	w.count("list or map variable")
	w.set(w.fresh("list"), t, w.literal(t, 2))
}

// appending adds to a list, whole numbers among real ones.
func (w *writer) appending() {
	t := pick(w, []*typ{intsType, floatsType, floatsType, wordsType})
	s := w.variable(t, true)
	if s == "" {
		x := w.fresh("list")
		w.set(x, t, w.literal(t, 1))
		s = w.mark(x)
	}
	w.count("append")
	w.top(s + " = append(" + s + ", " + w.intoFloat(t.elem, 1, "W1 append") + ", " + w.intoFloat(t.elem, 1, "W1 append") + ")\nfmt.Println(" + s + ")")
}

func (w *writer) statements() {
	for range 1 + w.IntN(3) {
		w.top(strings.TrimRight(w.stmt(3), "\n"))
	}
}

func (w *writer) newFunction() {
	w.count("function")
	w.function(w.fresh("fn"), w.signature(), false)
}

func (w *writer) sameFunction() {
	all := w.redeclarable(func(e *entity) bool {
		if e.role != function || len(e.typ.results) != 1 || e.pinned {
			return false
		}
		for _, t := range append(append([]*typ{}, e.typ.params...), e.typ.results...) {
			if !w.nameable(t) {
				return false
			}
		}
		return !w.usedHere(e.name)
	})
	if len(all) == 0 {
		w.newFunction()
		return
	}
	w.count("function declared again, same type")
	e := pick(w, all)
	w.function(e.name, e.typ, true)
}

// inMethod tells whether a method depends on a name, so that the name cannot stand for something of another type.
func (w *writer) inMethod(name string) bool {
	for _, e := range w.sorted() {
		if e.role == function && strings.Contains(e.name, ".") && w.dependsOn(e, name) {
			return true
		}
	}
	return false
}

// inOther is inMethod for methods of other types.
func (w *writer) inOther(name string) bool {
	for _, e := range w.sorted() {
		if e.role == function && strings.Contains(e.name, ".") && !strings.HasPrefix(e.name, name+".") && w.dependsOn(e, name) {
			return true
		}
	}
	return false
}

// usedHere tells whether something that the cell has used or declared depends on a name.
func (w *writer) usedHere(name string) bool {
	for _, t := range sortedNames(w.touched) {
		if e := w.names[t]; e != nil && e.role != variable && w.dependsOn(e, name) {
			return true
		}
	}
	return false
}

func (w *writer) otherFunction() {
	all := w.redeclarable(func(e *entity) bool {
		return e.role == function && len(e.typ.results) == 1 && !w.usedHere(e.name) && !w.inMethod(e.name)
	})
	if len(all) == 0 {
		return
	}
	e := pick(w, all)
	t := w.signature()
	if same(t, e.typ) {
		return
	}
	w.count("function declared again, other type")
	w.function(e.name, t, false)
}

func (w *writer) newStruct() {
	w.count("struct type")
	name := w.fresh("T")
	w.structType(name, w.someFields(name), w.someMethods(), false)
}

func (w *writer) sameStruct() {
	all := w.redeclarable(func(e *entity) bool {
		return e.role == typeName && e.typ.kind == structKind && !w.usedHere(e.name) && !w.inOther(e.name)
	})
	if len(all) == 0 {
		w.newStruct()
		return
	}
	w.count("struct type declared again")
	name := pick(w, all).name
	w.structType(name, w.someFields(name), w.someMethods(), false)
}

func (w *writer) structVariable() {
	all := w.structs(w.nameable)
	if len(all) == 0 {
		w.newStruct()
		return
	}
	t := pick(w, all)
	if w.chance(40) {
		t = pointerTo(t)
		w.count("pointer to struct")
	}
	w.count("struct variable")
	w.set(w.fresh("t"), t, w.literal(t, 2))
}

// changing calls methods that change their receiver.
func (w *writer) changing() {
	t, m, ok := w.methodWhere(func(m method) bool { return m.changes })
	if !ok {
		w.newStruct()
		return
	}
	w.count("method that changes its receiver")
	v := w.held(t)
	x := w.fresh("v")
	w.give([]string{x}, []*typ{m.result}, x+" := ", v+"."+m.name+"("+w.value(m.param, 1)+")")
}

// methodWhere picks a method that can be called here.
func (w *writer) methodWhere(want func(method) bool) (t *typ, m method, ok bool) {
	var types []*typ
	var methods []method
	for _, t := range w.structs(w.nameable) {
		for _, m := range t.methods {
			if e := w.names[t.name+"."+m.name]; e != nil && !e.gone && want(m) {
				types, methods = append(types, t), append(methods, m)
			}
		}
	}
	if len(types) == 0 {
		return nil, m, false
	}
	i := w.IntN(len(types))
	w.mark(types[i].name)
	w.mark(types[i].name + "." + methods[i].name)
	return types[i], methods[i], true
}

// held gives a variable of a struct type, a new one if there is none.
func (w *writer) held(t *typ) string {
	if v := w.variable(t, true); v != "" {
		return v
	}
	x := w.fresh("t")
	w.set(x, t, w.literal(t, 1))
	return w.mark(x)
}

// family declares an interface and struct types of equal fields that implement it.
func (w *writer) family() {
	w.count("interface type")
	name := w.fresh("I")
	ms := []method{{name: "Size", param: pick(w, plainTypes), result: intType}, {name: "Label", param: pick(w, plainTypes), result: pick(w, plainTypes)}}
	i := &typ{kind: interfaceKind, name: name, ref: w.meant(name), methods: ms}
	draft := "interface {\n"
	for _, m := range ms {
		draft += "\t" + m.name + "(" + m.param.text() + ") " + m.result.text() + "\n"
	}
	draft += "}\n"
	fmt.Fprintf(&w.global, "type %s %s", i.ref, w.forReference(draft))
	w.introduce(&entity{role: typeName, name: name, ref: i.ref, typ: i, pinned: true}, false)
	w.declaration("type " + name + " " + draft)
	fields := []field{{"a", intType}, {"b", pick(w, plainTypes)}}
	for range 2 + w.IntN(2) {
		own := append([]method(nil), ms...)
		byPointer := w.chance(30)
		for j := range own {
			own[j].pointer = byPointer
		}
		member := w.structType(w.fresh("U"), fields, own, true)
		w.names[member.name].pinned = true
		i.members = append(i.members, member)
	}
	w.interfaceVariable()
}

func (w *writer) interfaces() (out []*typ) {
	for _, e := range w.sorted() {
		if e.role == typeName && e.typ.kind == interfaceKind && len(e.typ.members) > 0 {
			out = append(out, e.typ)
		}
	}
	return out
}

func (w *writer) interfaceVariable() {
	all := w.interfaces()
	if len(all) == 0 {
		w.family()
		return
	}
	t := pick(w, all)
	if w.chance(40) {
		w.set(w.fresh("x"), t, w.literal(t, 1))
		return
	}
	w.count("slice of interface values")
	var parts []string
	for range 2 + w.IntN(3) {
		parts = append(parts, w.literal(t, 1))
	}
	s, x := w.fresh("xs"), w.fresh("x")
	w.give([]string{s}, []*typ{sliceOf(t)}, s+" := ", "[]"+w.typeText(t)+"{"+strings.Join(parts, ", ")+"}")
	w.names[s].pinned = true
	loop := "for _, " + x + " := range " + w.mark(s) + " {\n" + w.interfaceSwitch(t, x)
	arg := w.value(t.methods[0].param, 1)
	w.top(loop + "\tfmt.Println(" + x + ".Size(" + arg + "))\n}")
}

// interfaceSwitch tells the members of a family apart.
func (w *writer) interfaceSwitch(t *typ, x string) string {
	w.count("type switch")
	y := w.fresh("y")
	s := "\tswitch " + y + " := " + x + ".(type) {\n"
	for _, m := range t.members {
		star := ""
		if m.methods[0].pointer {
			star = "*"
		}
		s += "\tcase " + star + w.typeText(m) + ":\n\t\tfmt.Println(" + strconv.Quote(m.name) + ", " + y + ".a, " + y + ".b)\n"
		if w.chance(20) {
			break
		}
	}
	return s + "\tdefault:\n\t\tfmt.Println(\"other\", " + y + " == nil)\n\t}\n"
}

// anySwitch tells values apart that are held by any, structs of equal fields among them.
func (w *writer) anySwitch() {
	all := w.structs(w.nameable)
	if len(all) < 2 {
		w.family()
		return
	}
	w.count("type switch on any")
	t, u := pick(w, all), pick(w, all)
	for range 3 {
		if same(t, u) {
			u = pick(w, all)
		}
	}
	if same(t, u) {
		return
	}
	values := []string{w.value(intType, 1), w.dynamic(floatType, 1), w.value(stringType, 1), "nil", w.literal(t, 1), w.literal(u, 1), w.value(boolType, 1), w.literal(intsType, 1), "&" + w.literal(t, 1)}
	w.Shuffle(len(values), func(i, j int) { values[i], values[j] = values[j], values[i] })
	x, y := w.fresh("x"), w.fresh("y")
	w.top("for _, " + x + " := range []any{" + strings.Join(values[:6], ", ") + "} {\n\tswitch " + y + " := " + x + ".(type) {\n" +
		"\tcase int:\n\t\tfmt.Println(\"int\", " + y + "+1)\n\tcase float64:\n\t\tfmt.Println(\"real\", " + y + ")\n\tcase string, bool:\n\t\tfmt.Println(\"word\", " + y + ")\n" +
		"\tcase nil:\n\t\tfmt.Println(\"nothing\")\n\tcase " + w.typeText(u) + ":\n\t\tfmt.Println(" + strconv.Quote(u.name) + ", " + y + "." + u.fields[0].name + ")\n" +
		"\tcase " + w.typeText(t) + ":\n\t\tfmt.Println(" + strconv.Quote(t.name) + ", " + y + "." + t.fields[0].name + ")\n" +
		"\tcase *" + w.typeText(t) + ":\n\t\tfmt.Println(\"pointer\", " + y + "." + t.fields[0].name + ")\n" +
		"\tdefault:\n\t\tfmt.Println(\"other\")\n\t}\n}")
}

// shown writes an expression whose value the cell shows.
func (w *writer) shown() {
	w.count("value shown")
	t := pick(w, plainTypes)
	s := w.dynamic(t, 2)
	if t == floatType && strings.HasPrefix(s, refOpen) {
		s = "(" + s + ")"
	}
	w.cell.WriteString(forCell(s) + "\n")
	w.body.WriteString("show(" + w.forReference(s) + ")\n")
}
