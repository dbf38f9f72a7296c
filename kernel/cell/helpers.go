package cell

import (
	"fmt"
	"reflect"
	goruntime "runtime"
	"strconv"
	"strings"
	"sync/atomic"

	"ampturn/kernel"
	"ampturn/kernel/cell/nb"
)

// interrupted stops a cell on the user's wish.
type interrupted struct{}

// tooDeep stops functions that call themselves without end.
type tooDeep struct{}

// userPanic is what a cell gave to panic.
type userPanic struct{ value any }

// helpers are the compiled functions that lowered text calls.
func (s *Session) helpers() map[string]reflect.Value {
	var at, depth atomic.Int64
	s.raceMark, s.raceDepth = &at, &depth
	return map[string]reflect.Value{
		"Interrupt": reflect.ValueOf(func() { panic(interrupted{}) }),
		"Deep":      reflect.ValueOf(s.deep),
		"Panic":     reflect.ValueOf(func(v any) { panic(userPanic{v}) }),
		"At":        reflect.ValueOf(func(k int) { at.Store(int64(k)) }),
		"Poll": reflect.ValueOf(func() {
			if s.machine.poll.Load() {
				panic(interrupted{})
			}
		}),
		"Enter": reflect.ValueOf(func() {
			if depth.Add(1) > maxDepth {
				s.deep()
			}
		}),
		"Depth":    reflect.ValueOf(depth.Load),
		"SetDepth": reflect.ValueOf(depth.Store),
		"Leave":    reflect.ValueOf(func() { depth.Add(-1) }),
		"Pass": reflect.ValueOf(func() {
			if s.hooks.Pass != nil {
				s.hooks.Pass()
			}
		}),
		"Show":       reflect.ValueOf(s.showAt),
		"ShowBundle": reflect.ValueOf(s.showBundle),
		"ShowText":   reflect.ValueOf(s.showText),
		"Help":       reflect.ValueOf(s.showHelp),
		"Print":      reflect.ValueOf(func(v ...any) (int, error) { return s.print(fmt.Sprint(v...)) }),
		"Println":    reflect.ValueOf(func(v ...any) (int, error) { return s.print(fmt.Sprintln(v...)) }),
		"Printf":     reflect.ValueOf(func(format string, v ...any) (int, error) { return s.print(fmt.Sprintf(format, v...)) }),
		"Worded":     reflect.ValueOf(func(k int, v any) any { return worded{v, s.ableAt(k)} }),
		"Fault":      reflect.ValueOf(func(k int, v any) error { return worded{v, s.ableAt(k)} }),
		"Bare":       reflect.ValueOf(bare),
		"Text":       reflect.ValueOf(func(k int, zero any, f func(any) string) { s.able(k, zero).text = f }),
		"Unwrap":     reflect.ValueOf(func(k int, zero any, f func(any) error) { s.able(k, zero).unwrap = f }),
		"Is":         reflect.ValueOf(func(k int, zero any, f func(any, error) bool) { s.able(k, zero).is = f }),
		"Typed":      reflect.ValueOf(s.typedAt),
		"Same":       reflect.ValueOf(same),
		"Size":       reflect.ValueOf(size),

		"Letters":      reflect.ValueOf(nb.Letters),
		"SortList":     reflect.ValueOf(nb.SortList),
		"SortBy":       reflect.ValueOf(nb.SortBy),
		"SortStableBy": reflect.ValueOf(nb.SortStableBy),
		"Sort":         reflect.ValueOf(nb.Sort),
		"MinFloat":     reflect.ValueOf(nb.MinFloat),
		"MaxFloat":     reflect.ValueOf(nb.MaxFloat),
		"MinInt":       reflect.ValueOf(nb.MinInt),
		"MaxInt":       reflect.ValueOf(nb.MaxInt),
		"MinUint":      reflect.ValueOf(nb.MinUint),
		"MaxUint":      reflect.ValueOf(nb.MaxUint),
		"MinString":    reflect.ValueOf(nb.MinString),
		"MaxString":    reflect.ValueOf(nb.MaxString),
	}
}

// mostBytes is how much a cell may ask for with one make.
const mostBytes = 4 << 30

// size lets a size through that one can have.
func size(n, each int) int {
	if n > mostBytes/each {
		panic(userPanic{fmt.Sprintf("make: %d elements of %d bytes are more than the 4 GB that a cell may have at a time", n, each)})
	}
	return n
}

// deep ends the goroutine of the cell, which unwinds in linear time where a panic would not. In other goroutines, which
// compiled code waits for, it panics.
func (s *Session) deep() {
	if goroutine() == s.runner.Load() {
		s.tooDeep.Store(true)
		goruntime.Goexit()
	}
	panic(tooDeep{})
}

// goroutine gives the number of the goroutine under way.
func goroutine() int64 {
	var buf [64]byte
	text := strings.Fields(string(buf[:goruntime.Stack(buf[:], false)]))
	n, _ := strconv.ParseInt(text[1], 10, 64)
	return n
}

func (s *Session) print(text string) (int, error) {
	s.stream("stdout", text)
	return len(text), nil
}

// stream writes text of the running cell.
func (s *Session) stream(name, text string) {
	s.Emit(kernel.Output{Kind: kernel.Stream, Name: name, Text: text})
}
