package cell

import (
	"go/token"
	"hash/fnv"
	"io"
	"strconv"

	"ampturn/kernel"
)

// A value may rest on a cell that has been changed or deleted since. Each run notes for the names that it sets which cell
// set them, in which version, and which names of other cells it read. A version is a hash of a cell's words and of the
// versions that it read: a run that repeats what was there changes none. Cells are told apart by the ids that the front
// end gives; without ids there is no such note.

// setting is the last run that set a name.
type setting struct {
	key     string // of the cell
	number  int    // execution count
	version uint64
	basis   []basis
}

// basis is a name that was read, as another cell had set it.
type basis struct {
	name, key string
	version   uint64
}

// ledger knows where the names of a notebook come from.
type ledger struct {
	set     map[string]setting
	from    map[string]map[string]uint64 // by cell: the names that its last run set, and their versions
	count   map[string]int               // by cell: its last execution count
	deleted map[string]bool
}

func newLedger() ledger {
	return ledger{set: map[string]setting{}, from: map[string]map[string]uint64{}, count: map[string]int{}, deleted: map[string]bool{}}
}

// mostNotes is how many names a cell is told about.
const mostNotes = 3

// notes tells what a cell that is about to run rests on although it has been changed or deleted.
func (l *ledger) notes(c kernel.Cell, reads []string) (notes []string) {
	for _, id := range c.Deleted {
		l.deleted[id] = true
	}
	delete(l.deleted, c.ID) // undone
	for _, name := range reads {
		if why := l.why(name, c.ID, map[string]bool{}); why != "" && len(notes) < mostNotes {
			notes = append(notes, "note: "+name+" "+why)
		}
	}
	return notes
}

// why tells why a name does not stand for what the cells say now; "" if it does.
func (l *ledger) why(name, reader string, seen map[string]bool) string {
	s, ok := l.set[name]
	if !ok || seen[name] || s.key == reader {
		return ""
	}
	seen[name] = true
	at := "cell " + strconv.Itoa(s.number)
	if l.deleted[s.key] {
		return "was set in " + at + ", which has been deleted"
	}
	if _, still := l.from[s.key][name]; !still {
		return "was set in " + at + ", whose text does not set it any more"
	}
	for _, b := range s.basis {
		if b.key == s.key {
			continue
		}
		of := "cell " + strconv.Itoa(l.count[b.key])
		switch version, still := l.from[b.key][b.name]; {
		case l.deleted[b.key]:
			return "was set in " + at + " from " + b.name + " of a cell that has been deleted"
		case !still:
			return "was set in " + at + " from " + b.name + ", which " + of + " does not set any more"
		case version != b.version:
			return "was set in " + at + " before " + b.name + " was changed in " + of + "; run the cell of " + name + " again"
		}
	}
	for _, b := range s.basis {
		if l.set[b.name].key == b.key {
			if why := l.why(b.name, s.key, seen); why != "" {
				return "was set in " + at + " from " + b.name + ", which " + why
			}
		}
	}
	return ""
}

// record notes what a run has set, and what it read for that.
func (l *ledger) record(c kernel.Cell, sets, functions map[string]bool, reads []string) {
	if c.ID == "" || c.Transient {
		return
	}
	var from []basis
	h := fnv.New64a()
	_, _ = io.WriteString(h, words(c.Source))
	for _, name := range reads {
		s, ok := l.set[name]
		if !ok {
			continue
		}
		if s.key != c.ID {
			from = append(from, basis{name, s.key, s.version})
		}
		if s.key != c.ID || sets[name] && !functions[name] { // its own earlier value counts where it is read before it is set
			_, _ = io.WriteString(h, name+strconv.FormatUint(s.version, 16))
		}
	}
	version := h.Sum64()
	l.from[c.ID], l.count[c.ID] = map[string]uint64{}, c.Number
	for name := range sets {
		s := setting{key: c.ID, number: c.Number, version: version, basis: from}
		if functions[name] { // reads when it is called
			s.basis = nil
		}
		l.set[name] = s
		l.from[c.ID][name] = s.version
	}
}

// words is a source without its comments and blanks.
func words(source string) string {
	out := ""
	for _, t := range tokens(source, func(int, string) {}) {
		if t.tok == token.SEMICOLON {
			out += ";"
			continue
		}
		out += t.tok.String() + t.lit + " "
	}
	return out
}

// reads lists the names of other cells that a cell reads, also through functions.
func (s *Session) reads(u *unitOfWork) []string {
	seen, own := map[string]bool{}, map[string]bool{}
	for _, l := range u.own {
		own[l.name] = true
	}
	var add func(name string)
	add = func(name string) {
		l := u.before.names[name]
		if l == nil || seen[name] || own[name] {
			return
		}
		seen[name] = true
		if l.fn != nil {
			for n := range l.fn.uses {
				add(n)
			}
		}
	}
	for name, o := range u.uses {
		if o != nil {
			add(name)
		}
	}
	return sortedKeys(seen)
}

// sets lists the names that a cell sets, and which of them are functions or types.
func (s *Session) sets(u *unitOfWork) (sets, functions map[string]bool) {
	sets, functions = map[string]bool{}, map[string]bool{}
	for _, l := range u.own {
		sets[l.name] = true
		if !isVar(l) {
			functions[l.name] = true
		}
	}
	for _, t := range u.low.top {
		for _, n := range t.assigns {
			sets[n] = true
		}
	}
	return sets, functions
}
