package batch

import (
	"context"
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"ampturn/kernel"
	"ampturn/kernel/diff"
	"ampturn/kernel/notebook"
)

// Verify runs notebooks again in a fresh engine and compares what they show with what is saved in them. It writes no
// file. A notebook differs where a cell's outputs differ beyond the tolerance, are stale or are missing, where a data file
// has changed, and where the recorded verdicts are not those of the run; the report says so cell by cell.
//
// The exit code is [Fine], [Differ], [Failed] where a cell fails or a file cannot be read, [Use] for what carries no
// outputs; of several notebooks the gravest, in the order Use, Failed, Differ.
func Verify(ctx context.Context, paths []string, s Settings) int {
	code := Fine
	for _, path := range paths {
		if strings.EqualFold(filepath.Ext(path), ".go") {
			fmt.Fprintf(s.Trouble, "ampturn: %s is a text and carries no outputs; verify the notebook that ampturn run writes\n", path)
			return Use
		}
	}
	for _, path := range paths {
		got, err := s.verify(ctx, path)
		if err != nil {
			fmt.Fprintf(s.Trouble, "ampturn: %v\n", err)
		}
		if got == Failed || code == Fine {
			code = got
		}
		if ctx.Err() != nil {
			break
		}
	}
	return code
}

// verification is one notebook, saved and run again.
type verification struct {
	s       Settings
	saved   *notebook.Notebook
	fresh   document
	before  map[int][]*notebook.Output // outputs of the fresh run before places were filled at its end, by cell
	numbers int
	cells   []string // reasons, with the cell in front
	whole   []string // reasons that belong to no cell
	differ  map[int]bool
}

func (s Settings) verify(ctx context.Context, path string) (int, error) {
	saved, err := s.open(path)
	if err != nil {
		return Failed, err
	}
	fresh, err := s.open(path)
	if err != nil {
		return Failed, err
	}
	fmt.Fprintln(s.Report, path)
	v := &verification{s: s, saved: saved.nb, fresh: fresh, before: map[int][]*notebook.Output{}, differ: map[int]bool{}}
	report, err := s.execute(ctx, fresh, nil, v.finish)
	if err != nil {
		return Failed, err
	}
	if _, err := s.page(fresh); err != nil { // reads the pictures of the texts and leaves the record
		return Failed, err
	}
	if report.Interrupted {
		fmt.Fprintln(s.Report, "  interrupted; nothing is verified")
		return Failed, nil
	}
	v.compare(report)
	return v.tell(report), nil
}

// finish notes what places show before the end of the run fills them: a front end saves them like that.
func (v *verification) finish(out kernel.Sink) {
	for i, c := range v.fresh.nb.Cells {
		for _, o := range c.Outputs {
			was := *o
			v.before[i] = append(v.before[i], &was)
		}
	}
	if v.s.Finish != nil {
		v.s.Finish(out)
	}
}

// compare collects the reasons for which the notebook differs.
func (v *verification) compare(report *notebook.Report) {
	stale := diff.Stale(v.saved)
	for _, r := range report.Cells {
		for _, reason := range stale[r.Number] {
			v.because(r.Number, reason)
		}
		saved, now := v.saved.Cells[r.Index], v.fresh.nb.Cells[r.Index]
		if r.Status != notebook.Done || saved.Count == 0 && len(saved.Outputs) == 0 {
			continue
		}
		changes, n := v.s.Tolerance.Outputs(saved.Outputs, now.Outputs)
		if len(changes) > 0 {
			if early, _ := v.s.Tolerance.Outputs(saved.Outputs, v.before[r.Index]); len(early) == 0 {
				changes = nil
			}
		}
		v.numbers += n
		for i, c := range changes {
			if i == 5 {
				v.because(r.Number, fmt.Sprintf("and %d more", len(changes)-i))
				break
			}
			v.because(r.Number, c.String())
		}
	}
	if report.Failed == nil {
		v.record()
	}
}

func (v *verification) because(number int, reason string) {
	v.cells = append(v.cells, fmt.Sprintf("cell %d: %s", number, reason))
	v.differ[number] = true
}

// record compares what the saved run recorded with what this one did.
func (v *verification) record() {
	old, now := v.saved.Record(), v.fresh.nb.Record()
	if old == nil || now == nil {
		return
	}
	say := func(format string, args ...any) { v.whole = append(v.whole, fmt.Sprintf(format, args...)) }
	for _, f := range old.Files {
		i := slices.IndexFunc(now.Files, func(x notebook.Named) bool { return x.Name == f.Name })
		switch {
		case i < 0:
			say("data file %s: the saved run read it, this one did not", f.Name)
		case now.Files[i].Value != f.Value:
			say("data file %s has changed: SHA-256 was %.12s, is %.12s", f.Name, f.Value, now.Files[i].Value)
		}
	}
	for _, f := range now.Files {
		if !slices.ContainsFunc(old.Files, func(x notebook.Named) bool { return x.Name == f.Name }) {
			say("data file %s: this run reads it, the saved one did not", f.Name)
		}
	}
	verdicts := v.s.Tolerance.Revisions(&notebook.Notebook{Metadata: v.saved.Metadata}, &notebook.Notebook{Metadata: v.fresh.nb.Metadata}, v.s.Format).Verdicts
	for _, m := range verdicts {
		say("recorded verdict %s", strings.TrimSuffix(arrow(m)+"; "+m.Note, "; "))
	}
}

// tell says how it went and gives the exit code.
func (v *verification) tell(report *notebook.Report) int {
	for _, line := range append(v.cells, v.whole...) {
		fmt.Fprintf(v.s.Report, "  %s\n", line)
	}
	if old := v.saved.Record(); old != nil && len(v.cells)+len(v.whole) > 0 {
		for _, p := range v.s.Provenance {
			if i := slices.IndexFunc(old.Provenance, func(x notebook.Named) bool { return x.Name == p.Name && sameLibrary(x.Value, p.Value) }); i >= 0 && old.Provenance[i].Value != p.Value {
				fmt.Fprintf(v.s.Report, "  note: saved with %s, run again with %s\n", old.Provenance[i].Value, p.Value)
			}
		}
	}
	switch f := report.Failed; {
	case f != nil:
		text := ""
		if f.Fault != nil {
			text = f.Fault.Text
		}
		fmt.Fprintf(v.s.Report, "  cell %d fails in a run from the top; nothing after it is verified\n", f.Number)
		if f.Fault != nil {
			fmt.Fprintln(v.s.Trouble, strings.Join(f.Fault.Traceback, "\n"))
		}
		if why := diff.Hidden(v.fresh.nb, f.Number, text); why != "" {
			fmt.Fprintf(v.s.Report, "  %s\n", why)
		}
		return Failed
	case len(v.cells)+len(v.whole) > 0:
		fmt.Fprintf(v.s.Report, "  DIFFERS: %d of %d cells\n", len(v.differ), len(report.Cells))
		return Differ
	}
	fmt.Fprintf(v.s.Report, "  same: %d cells, %d numbers within %g of each other\n", len(report.Cells), v.numbers, v.s.Tolerance.Relative)
	return Fine
}

// sameLibrary tells whether two lines of provenance are about the same program or library.
func sameLibrary(a, b string) bool {
	x, _, _ := strings.Cut(a, " ")
	y, _, _ := strings.Cut(b, " ")
	return x == y
}

// arrow is what moved in one line.
func arrow(m diff.Moved) string {
	switch {
	case m.Old == "":
		return m.Name + ": new, " + m.New
	case m.New == "":
		return m.Name + ": gone, was " + m.Old
	}
	return m.Name + ": " + m.Old + " -> " + m.New
}
