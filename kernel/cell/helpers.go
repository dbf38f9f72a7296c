package cell

import (
	"fmt"
	"math"
	"reflect"
	goruntime "runtime"
	"sort"
	"strconv"
	"strings"
	"sync/atomic"

	"ampturn/kernel"
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
			if atomic.LoadInt32(s.machine.stop) != 0 {
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
		"Worded":     reflect.ValueOf(func(v any, text func() string) any { return worded{v, text} }),
		"Typed":      reflect.ValueOf(func(k int, v any) any { return typed{v, s.shownAt(k).typ} }),
		"Sort":       reflect.ValueOf(sortKeys),
		"MinFloat":   reflect.ValueOf(func(v ...float64) float64 { return extreme(v, math.Min) }),
		"MaxFloat":   reflect.ValueOf(func(v ...float64) float64 { return extreme(v, math.Max) }),
		"MinInt":     reflect.ValueOf(func(v ...int64) int64 { return extreme(v, func(a, b int64) int64 { return min(a, b) }) }),
		"MaxInt":     reflect.ValueOf(func(v ...int64) int64 { return extreme(v, func(a, b int64) int64 { return max(a, b) }) }),
		"MinUint":    reflect.ValueOf(func(v ...uint64) uint64 { return extreme(v, func(a, b uint64) uint64 { return min(a, b) }) }),
		"MaxUint":    reflect.ValueOf(func(v ...uint64) uint64 { return extreme(v, func(a, b uint64) uint64 { return max(a, b) }) }),
		"MinString":  reflect.ValueOf(func(v ...string) string { return extreme(v, func(a, b string) string { return min(a, b) }) }),
		"MaxString":  reflect.ValueOf(func(v ...string) string { return extreme(v, func(a, b string) string { return max(a, b) }) }),
	}
}

func extreme[T any](v []T, f func(a, b T) T) T {
	x := v[0]
	for _, y := range v[1:] {
		x = f(x, y)
	}
	return x
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

// worded is a value of a cell's type with the text it gives itself.
type worded struct {
	value any
	text  func() string
}

// Format writes the text where a text is asked for, the bare value elsewhere.
func (w worded) Format(f fmt.State, verb rune) {
	switch verb {
	case 'v', 's', 'q':
		if !f.Flag('#') {
			fmt.Fprintf(f, fmt.FormatString(f, map[rune]rune{'v': 's', 's': 's', 'q': 'q'}[verb]), w.text())
			return
		}
	}
	fmt.Fprintf(f, fmt.FormatString(f, verb), w.value)
}

// Error makes a cell's error one for compiled code too.
func (w worded) Error() string { return w.text() }

// sortKeys sorts the keys of a map: numbers and texts by value, structs and arrays part by part.
func sortKeys(keys any) {
	v := reflect.ValueOf(keys)
	sort.SliceStable(keys, func(i, j int) bool { return compare(v.Index(i), v.Index(j)) < 0 })
}

func compare(a, b reflect.Value) int {
	switch a.Kind() {
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		return order(a.Int(), b.Int())
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64, reflect.Uintptr:
		return order(a.Uint(), b.Uint())
	case reflect.Float32, reflect.Float64:
		return order(a.Float(), b.Float())
	case reflect.String:
		return order(a.String(), b.String())
	case reflect.Bool:
		return order(fmt.Sprint(a.Bool()), fmt.Sprint(b.Bool()))
	case reflect.Struct:
		for i := 0; i < a.NumField(); i++ {
			if c := compare(a.Field(i), b.Field(i)); c != 0 {
				return c
			}
		}
	case reflect.Array:
		for i := 0; i < a.Len(); i++ {
			if c := compare(a.Index(i), b.Index(i)); c != 0 {
				return c
			}
		}
	case reflect.Interface:
		if a.IsNil() || b.IsNil() {
			return order(fmt.Sprint(!a.IsNil()), fmt.Sprint(!b.IsNil()))
		}
		x, y := a.Elem(), b.Elem()
		if x.Type() == y.Type() {
			return compare(x, y)
		}
		return order(x.Type().String(), y.Type().String())
	}
	return 0
}

func order[T int64 | uint64 | float64 | string](a, b T) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}
