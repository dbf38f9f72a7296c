package cell

import (
	"fmt"
	"regexp"
	"runtime"
	"runtime/debug"
	"strings"
	"time"

	"ampturn/kernel"
)

// coded is an error with a stable name.
type coded interface {
	error
	CodeName() string
}

// refusal words what keeps a cell from running. The first problem is the line that is read; up to four more follow.
func (s *Session) refusal(bad []problem) *kernel.Fault {
	f := &kernel.Fault{Name: bad[0].name}
	if f.Name == "" || bad[0].src.cell != s.now.Number {
		f.Name = "CheckError"
	}
	seen := map[string]bool{}
	for i, b := range bad {
		text := where(b.src, b.off) + b.text
		if seen[text] || len(seen) >= 5 {
			continue
		}
		seen[text] = true
		if i == 0 {
			f.Text = text
		}
		f.Traceback = append(f.Traceback, text)
		f.Traceback = append(f.Traceback, excerpt(b.src, b.off)...)
	}
	return f
}

// where writes "cell 4, line 2: ".
func where(src *source, off int) string {
	line, _ := src.place(off)
	return fmt.Sprintf("cell %d, line %d: ", src.cell, line)
}

// excerpt gives the source line with a mark under a place.
func excerpt(src *source, off int) []string {
	line, col := src.place(off)
	text := src.line(line)
	if strings.TrimSpace(text) == "" {
		return nil
	}
	var pad strings.Builder
	for i, r := range text {
		if i >= col-1 {
			break
		}
		if r == '\t' {
			pad.WriteByte('\t')
		} else {
			pad.WriteByte(' ')
		}
	}
	return []string{"    " + text, "    " + pad.String() + "^"}
}

// stopped words what stopped a running cell.
func (s *Session) stopped(u *unitOfWork, value any, stack []byte, after time.Duration) kernel.Outcome {
	kept, dropped := s.names(u)
	if _, ok := value.(interrupted); ok {
		text := fmt.Sprintf("interrupted in cell %d after %.1f s%s", u.src.cell, after.Seconds(), listed(kept, dropped))
		if s.stuck != nil {
			text += "; its last call goes on and cannot be stopped: restart the kernel if it does not end"
		}
		return kernel.Outcome{Interrupted: true, Fault: &kernel.Fault{Name: "Interrupted", Text: text, Traceback: []string{text}}}
	}
	name, text := faultText(value)
	m := s.markNow()
	if m.src == nil {
		m.src = u.src
	}
	f := &kernel.Fault{Name: name}
	off := s.point(m, value)
	f.Text = where(m.src, off) + text
	f.Traceback = append([]string{f.Text}, excerpt(m.src, off)...)
	if m.fn != "" {
		f.Traceback = append(f.Traceback, "in "+m.fn+", called from "+strings.TrimSuffix(where(u.src, s.topOff(u)), ": "))
	}
	if l := listed(kept, dropped); l != "" {
		f.Traceback = append(f.Traceback, strings.TrimPrefix(l, "; "))
	}
	if stack != nil {
		f.Traceback = append(f.Traceback, "this is a fault of the program; please report it:", string(stack))
	}
	return kernel.Outcome{Fault: f}
}

func (s *Session) markNow() mark {
	k := *s.machine.mark
	if racing {
		k = int(s.raceMark.Load())
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if k < 0 || k >= len(s.marks) {
		return mark{}
	}
	return s.marks[k]
}

func (s *Session) topOff(u *unitOfWork) int {
	if s.stuck != nil || u.low == nil || *s.machine.top >= len(u.low.top) {
		return 0
	}
	return u.low.top[*s.machine.top].off
}

var quoted = regexp.MustCompile(`-?\d+(?:\.\d+)?`)

// point finds the place in a statement that a mark stands for: its first line, unless the message quotes a number that
// stands in the statement once.
func (s *Session) point(m mark, value any) int {
	if m.end <= m.off || m.end > len(m.src.text) {
		return m.off
	}
	e, ok := value.(error)
	if !ok {
		return m.off
	}
	text := m.src.text[m.off:m.end]
	for _, n := range quoted.FindAllString(e.Error(), -1) {
		if i := strings.Index(text, n); i >= 0 && wordAt(text, i, len(n)) && !strings.Contains(text[i+1:], n) {
			return m.off + i
		}
	}
	return m.off
}

func wordAt(text string, i, n int) bool {
	is := func(b byte) bool {
		return b >= '0' && b <= '9' || b >= 'a' && b <= 'z' || b >= 'A' && b <= 'Z' || b == '_' || b == '.' || b == '"'
	}
	return (i == 0 || !is(text[i-1])) && (i+n >= len(text) || !is(text[i+n]))
}

// names lists the older names that the cell had set when it stopped, and those that it declared first.
func (s *Session) names(u *unitOfWork) (kept, dropped []string) {
	if u.low == nil || s.stuck != nil {
		return nil, sortedKeys(u.fresh)
	}
	seen := map[string]bool{}
	for i, t := range u.low.top {
		if i > *s.machine.top {
			break
		}
		m := s.markNow()
		if i == *s.machine.top && !(m.src == u.src && m.off > t.off) {
			break
		}
		for _, n := range t.assigns {
			if !seen[n] {
				seen[n] = true
				kept = append(kept, n)
			}
		}
	}
	return kept, sortedKeys(u.fresh)
}

func listed(kept, dropped []string) string {
	var parts []string
	if len(kept) > 0 {
		parts = append(parts, "names set before: "+strings.Join(kept, ", ")+" (kept)")
	}
	if len(dropped) > 0 {
		parts = append(parts, "first set here: "+strings.Join(dropped, ", ")+" (dropped)")
	}
	if len(parts) == 0 {
		return ""
	}
	return "; " + strings.Join(parts, "; ")
}

// faultText gives name and line of what stopped a cell.
func faultText(value any) (name, text string) {
	switch v := value.(type) {
	case tooDeep:
		return "TooDeep", fmt.Sprintf("functions call each other more than %d deep; is the end of a recursion missing?", maxDepth)
	case userPanic:
		if c, ok := v.value.(coded); ok {
			return c.CodeName(), c.Error()
		}
		return "Panic", fmt.Sprint(v.value)
	case coded:
		return v.CodeName(), v.Error()
	case error:
		if t := runtimeText(v.Error()); t != "" {
			return "RuntimeError", t
		}
		return "Error", v.Error()
	case string:
		if t := runtimeText(v); t != "" {
			return "RuntimeError", t
		}
		return "Error", v
	}
	return "Error", fmt.Sprint(value)
}

var runtimeWords = []struct{ has, say string }{
	{"integer divide by zero", "a whole number is divided by zero"},
	{"nil map", "the map is nil: make it first, m := map[..]..{}"},
	{"nil pointer dereference", "a pointer is nil here"},
	{"zero Value", "a pointer or function is nil here"},
	{"call of nil function", "the function is nil"},
	{"nil func", "the function is nil"},
	{"makeslice", "the length of a slice is negative or too large"},
	{"negative shift", "a shift by a negative number"},
	{"hash of unhashable", "a value of this type cannot be a key of a map"},
	{"comparing uncomparable", "values of this type cannot be compared"},
}

var (
	indexText  = regexp.MustCompile(`index out of range \[(-?\d+)\] with length (\d+)`)
	boundsText = regexp.MustCompile(`slice bounds out of range`)
	assertText = regexp.MustCompile(`interface conversion: (.*)`)
)

// runtimeText words a failure of the language; "" for others.
func runtimeText(raw string) string {
	if m := indexText.FindStringSubmatch(raw); m != nil {
		return "index " + m[1] + " is out of range; there are " + m[2] + " elements, the first is 0"
	}
	switch {
	case strings.Contains(raw, "index out of range"):
		return "an index is out of range; the first is 0, the last is len - 1"
	case boundsText.MatchString(raw), strings.Contains(raw, "slice index out of bounds"):
		return "the bounds of a slice are out of range"
	}
	for _, w := range runtimeWords {
		if strings.Contains(raw, w.has) {
			return w.say
		}
	}
	if m := assertText.FindStringSubmatch(raw); m != nil {
		return "the value is of another type: " + strings.ReplaceAll(m[1], "main.", "")
	}
	return ""
}

// ownStack gives the stack of a failure that is nobody's but the program's: a runtime error in compiled code outside
// the interpreter.
func ownStack(value any) []byte {
	if _, ok := value.(runtime.Error); !ok {
		return nil
	}
	stack := debug.Stack()
	lines := strings.Split(string(stack), "\n")
	for i, l := range lines {
		if strings.HasPrefix(l, "panic(") && i+2 < len(lines) {
			for _, f := range lines[i+2:] {
				switch {
				case strings.HasPrefix(f, "\t"), strings.HasPrefix(f, "runtime."), strings.HasPrefix(f, "panic("):
					continue
				case strings.Contains(f, "traefik/yaegi"), strings.HasPrefix(f, "reflect."):
					return nil
				}
				return stack
			}
		}
	}
	return nil
}
