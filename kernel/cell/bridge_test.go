package cell

import (
	"errors"
	"go/ast"
	"go/token"

	"ampturn/kernel"
)

// Split parses a text as a cell and gives the number of its problems; it fails where a problem lies outside the text.
func Split(text string) (problems int, err error) {
	p, bad := parse(token.NewFileSet(), 1, text)
	for _, b := range bad {
		if b.off < 0 || b.off > len(text) {
			return len(bad), errors.New("a problem lies outside the text")
		}
		where(b.src, b.off)
		excerpt(b.src, b.off)
	}
	if p == nil && len(bad) == 0 {
		return 0, errors.New("neither a cell nor a problem")
	}
	return len(bad), nil
}

// Check checks a cell, its units included, without lowering it.
func (s *Session) Check(text string) (problems int) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.now = kernel.Cell{Number: 1}
	p, bad := parse(s.fset, 1, text)
	if len(bad) > 0 {
		s.refusal(bad)
		return len(bad)
	}
	r, bad := s.check(p, s.fset)
	if len(bad) == 0 {
		_, bad = s.checkUnits(r)
	}
	if len(bad) > 0 {
		s.refusal(bad)
	}
	return len(bad)
}

// Lower checks and lowers a cell without compiling it.
func (s *Session) Lower(text string) (ok bool, err error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.now = kernel.Cell{Number: 1}
	p, bad := parse(s.fset, 1, text)
	if len(bad) > 0 {
		return false, nil
	}
	r, bad := s.check(p, s.fset)
	if len(bad) > 0 {
		return false, nil
	}
	report, bad := s.checkUnits(r)
	if len(bad) > 0 {
		return false, nil
	}
	s.pendingMethods = nil
	_, err = s.lowerSafe(r, func(e ast.Expr) string {
		if report == nil {
			return ""
		}
		return report.Text(e)
	})
	if _, refused := err.(cannot); refused {
		return false, nil
	}
	return err == nil, err
}

// Racing tells whether races are looked for, which takes memory and time.
const Racing = racing
