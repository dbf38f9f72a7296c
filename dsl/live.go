package dsl

import (
	"fmt"
	"math"
	"strings"
	"time"

	"ampturn/dsl/doc"
	"ampturn/dsl/session"
	"ampturn/magcirc"
)

// Ask has the user of the notebook type a line, and gives it. A notebook that runs without a user refuses.
//
//	by := Ask("measured by: ")
func Ask(question string) string {
	answer, err := session.Ask(question, false)
	if err != nil && session.Context().Err() == nil {
		refuse(magcirc.WrongUse, fmt.Sprintf("question %q", strings.TrimSpace(question)), err.Error(), "")
	}
	check(err)
	return answer
}

// Pause waits for a time, which an interrupt ends. Pause in a function given to [Later] lets other cells run meanwhile.
func Pause(duration Second) {
	const longest = 1e6 // s, eleven days
	wantRange("Pause", "duration", duration, 0, longest, "s")
	check(session.Wait(time.Duration(math.Round(duration * 1e9))))
}

// Later has a function run after the cell has ended. What it shows appears with the cell, whichever cell runs then. The
// functions of several calls run one after another, never at the same time as a cell; where one pauses, cells go on. A
// cell that fails leaves nothing, and an interrupt between two cells ends what is left.
//
//	Later(func() {
//		Pause(2*second)
//		fmt.Println("two seconds later")
//	})
func Later(work func()) {
	if work == nil {
		refuse(magcirc.BadValue, "Later", "there is no function", "write Later(func() { ... })")
	}
	session.Later(work)
}

// Names lists the names that the notebook has declared so far, with type, unit and value.
func Names() *TableView {
	t := doc.Table{Columns: []doc.Column{{Name: "name"}, {Name: "type"}, {Name: "unit"}, {Name: "value"}, {Name: "cell"}}}
	for _, n := range session.Names() {
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(n.Name), doc.Text(n.Type), doc.Text(n.Unit), doc.Text(n.Value), doc.Text(fmt.Sprint(n.Cell))})
	}
	if len(t.Rows) == 0 {
		t.Notes = []string{"no cell has declared a name yet"}
	}
	return &TableView{t}
}

// Help explains a name: signature, units, formula, validity and source, as its comment has them. It takes a name of the
// vocabulary, a method of it or a name of the notebook, quoted or not. A word that is no name lists the names whose comments
// speak of it.
//
//	Help(Gap)
//	Help("OperatingPoint.Flux")
//	Help("leakage")
func Help(name string) {
	data, ok := session.Help(name)
	if !ok {
		refuse(magcirc.UnknownName, "Help", fmt.Sprintf("nothing is known of %q", name), `write the name as a cell has it: Help(Gap), Help("T1.Solve")`)
	}
	session.Page(data)
}
