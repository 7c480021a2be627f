package cell_test

import (
	"sync"
	"testing"

	"levelsum/kernel/cell"
)

// A clone and its session are used at the same time; what they share is not
// written. The race detector sees it if it is.
func TestCloneBesideSession(t *testing.T) {
	s := newScope()
	for n, src := range []string{"x := 1.5\ny, z := 2, \"a\"", "for i := range 3 {\n\tx += float64(i)\n}"} {
		p, err := s.Check(&cell.Source{N: n + 1, Text: src})
		if err != nil {
			t.Fatal(err)
		}
		s.Commit(p, func(string) bool { return true })
	}
	var wait sync.WaitGroup
	for _, scope := range []*cell.Scope{s.Clone(), s} {
		wait.Go(func() {
			for n, src := range []string{"x + float64(y)", "func f() float64 { return x * float64(len(z)) }", "f()"} {
				p, err := scope.Check(&cell.Source{N: n + 3, Text: src})
				if err != nil {
					t.Error(err)
					return
				}
				scope.Commit(p, func(string) bool { return true })
			}
		})
	}
	wait.Wait()
}
