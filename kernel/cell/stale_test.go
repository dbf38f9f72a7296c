package cell_test

import (
	"context"
	"strings"
	"testing"

	"ampturn/kernel"
)

// TestStale runs cells with ids, as a front end sends them, and demands the note on what has been changed or deleted.
func TestStale(t *testing.T) {
	type step struct {
		id, src, note string
		deleted       []string
	}
	for name, steps := range map[string][]step{
		"changed below": {
			{id: "a", src: "gap := 1.0"}, {id: "b", src: "l := gap * 2"}, {id: "c", src: "l"},
			{id: "a", src: "gap := 1.5"},
			{id: "c", src: "l", note: "l was set in cell 2 before gap was changed in cell 4; run the cell of l again"},
			{id: "b", src: "l := gap * 2"}, {id: "c", src: "l"},
		},
		"run again unchanged": {
			{id: "a", src: "gap := 1.0"}, {id: "b", src: "l := gap * 2"}, {id: "a", src: "gap := 1.0 // mm"}, {id: "c", src: "l"},
		},
		"name dropped": {
			{id: "a", src: "gap := 1.0\nturns := 3"}, {id: "a", src: "gap := 1.0"},
			{id: "b", src: "turns", note: "turns was set in cell 1, whose text does not set it any more"},
		},
		"name moved": {
			{id: "a", src: "gap := 1.0"}, {id: "b", src: "l := gap"}, {id: "a", src: "air := 1.0"},
			{id: "c", src: "l", note: "l was set in cell 2 from gap, which cell 3 does not set any more"},
		},
		"deleted": {
			{id: "a", src: "gap := 1.0"}, {id: "b", src: "l := gap"},
			{id: "c", src: "gap", deleted: []string{"a"}, note: "gap was set in cell 1, which has been deleted"},
			{id: "c", src: "l", note: "l was set in cell 2 from gap of a cell that has been deleted"},
			{id: "a", src: "gap := 1.0"}, {id: "c", src: "gap\nl"},
		},
		"far": {
			{id: "a", src: "gap := 1.0"}, {id: "b", src: "l := gap"}, {id: "c", src: "e := l"}, {id: "a", src: "gap := 2.0"},
			{id: "d", src: "e", note: "e was set in cell 3 from l, which was set in cell 2 before gap was changed in cell 4"},
		},
		"through a function": {
			{id: "a", src: "gap := 1.0"}, {id: "b", src: "func f() float64 { return gap }"}, {id: "c", src: "l := f()"},
			{id: "a", src: "gap := 2.0"}, {id: "d", src: "f()"},
			{id: "d", src: "l", note: "l was set in cell 3 before gap was changed in cell 4"},
		},
		"counted": {
			{id: "a", src: "n := 0"}, {id: "b", src: "n = n + 1"}, {id: "c", src: "m := n"}, {id: "d", src: "m"}, {id: "b", src: "n = n + 1"},
			{id: "d", src: "m", note: "m was set in cell 3 before n was changed in cell 5"},
		},
		"from the top": {
			{id: "a", src: "x := 1"}, {id: "b", src: "y := x"}, {id: "c", src: "x = 5"}, {id: "d", src: "y + x"},
		},
		"failed": {
			{id: "a", src: "x := 1"}, {id: "b", src: "y := x"}, {id: "a", src: "x := 2\nNewRod(\"q\", -1)"}, {id: "c", src: "y"},
		},
		"without ids": {
			{src: "x := 1"}, {src: "y := x"}, {src: "x := 2"}, {src: "y"},
		},
	} {
		t.Run(name, func(t *testing.T) {
			n := open(t, false)
			for i, s := range steps {
				n.outs = nil
				n.s.Run(context.Background(), kernel.Cell{ID: s.id, Number: i + 1, Source: s.src, Deleted: s.deleted}, n.sink)
				got := ""
				for _, o := range n.outs {
					if o.Kind == kernel.Stream && o.Name == "stderr" {
						got += o.Text
					}
				}
				if (got == "") != (s.note == "") || !strings.Contains(got, s.note) {
					t.Errorf("cell %d %q says %q, want %q", i+1, s.src, got, s.note)
				}
			}
		})
	}
}
