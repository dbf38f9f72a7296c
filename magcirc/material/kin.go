package material

// joining is a law that knows the law between itself and one at another temperature better than by its values: one
// with a memory, whose parameters are interpolated.
type joining interface {
	// Toward gives the law at w of the way to the other.
	Toward(other Law, w float64) (Law, error)
}

// stretching is a law that knows itself with the field axis divided by k: J'(H) = J(k H).
type stretching interface {
	Stretch(k float64) (Law, error)
}

// joined gives the law between two by their own knowledge; ok is false where they have none.
func joined(cold, hot Law, w float64) (law Law, ok bool, err error) {
	if j, is := cold.(joining); is {
		law, err = j.Toward(hot, w)
		return law, true, err
	}
	if j, is := hot.(joining); is {
		law, err = j.Toward(cold, 1-w)
		return law, true, err
	}
	return nil, false, nil
}
