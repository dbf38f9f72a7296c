package nb

import (
	"fmt"
	"reflect"
	"sort"
)

// Sort sorts the keys of a map: numbers and texts by value, structs and arrays part by part.
func Sort(keys any) {
	v := reflect.ValueOf(keys)
	sort.SliceStable(keys, func(i, j int) bool { return Compare(v.Index(i), v.Index(j)) < 0 })
}

// Compare orders two values of one type: negative if a comes before b.
func Compare(a, b reflect.Value) int {
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
		for i := range a.NumField() {
			if c := Compare(a.Field(i), b.Field(i)); c != 0 {
				return c
			}
		}
	case reflect.Array:
		for i := range a.Len() {
			if c := Compare(a.Index(i), b.Index(i)); c != 0 {
				return c
			}
		}
	case reflect.Interface:
		if a.IsNil() || b.IsNil() {
			return order(fmt.Sprint(!a.IsNil()), fmt.Sprint(!b.IsNil()))
		}
		x, y := a.Elem(), b.Elem()
		if x.Type() == y.Type() {
			return Compare(x, y)
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

func extreme[T any](v []T, f func(a, b T) T) T {
	x := v[0]
	for _, y := range v[1:] {
		x = f(x, y)
	}
	return x
}

// MinFloat and its like are the builtins min and max, each for one kind.
func MinFloat(v ...float64) float64 {
	return extreme(v, func(a, b float64) float64 { return min(a, b) })
}

// MaxFloat is max of real numbers.
func MaxFloat(v ...float64) float64 {
	return extreme(v, func(a, b float64) float64 { return max(a, b) })
}

// MinInt is min of whole numbers.
func MinInt(v ...int64) int64 { return extreme(v, func(a, b int64) int64 { return min(a, b) }) }

// MaxInt is max of whole numbers.
func MaxInt(v ...int64) int64 { return extreme(v, func(a, b int64) int64 { return max(a, b) }) }

// MinUint is min of whole numbers without a sign.
func MinUint(v ...uint64) uint64 { return extreme(v, func(a, b uint64) uint64 { return min(a, b) }) }

// MaxUint is max of whole numbers without a sign.
func MaxUint(v ...uint64) uint64 { return extreme(v, func(a, b uint64) uint64 { return max(a, b) }) }

// MinString is min of texts.
func MinString(v ...string) string { return extreme(v, func(a, b string) string { return min(a, b) }) }

// MaxString is max of texts.
func MaxString(v ...string) string { return extreme(v, func(a, b string) string { return max(a, b) }) }
