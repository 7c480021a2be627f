package guard

import (
	"slices"
	"sync"
	"time"
)

// A Goroutine is one that a cell has started and that has not ended.
type Goroutine struct {
	Cell  int
	Since time.Time
}

var live struct {
	sync.Mutex
	next int
	cell int
	all  map[int]Goroutine
}

// SetCell says which cell runs from now on.
func SetCell(n int) {
	live.Lock()
	defer live.Unlock()
	live.cell = n
}

// Enter notes a goroutine of the running cell.
func Enter() int {
	live.Lock()
	defer live.Unlock()
	if live.all == nil {
		live.all = map[int]Goroutine{}
	}
	live.next++
	live.all[live.next] = Goroutine{Cell: live.cell, Since: time.Now()}
	return live.next
}

// Left is deferred at the top of a goroutine: it forgets it and keeps a panic
// in it from ending the process.
func Left(id int) {
	v := recover()
	live.Lock()
	delete(live.all, id)
	live.Unlock()
	if v == nil || v == any(Halted) {
		return
	}
	if Hooks.Panic != nil {
		Hooks.Panic(v)
	}
}

// Goroutines lists the live goroutines that cells have started, oldest first.
func Goroutines() []Goroutine {
	live.Lock()
	defer live.Unlock()
	out := make([]Goroutine, 0, len(live.all))
	for _, g := range live.all {
		out = append(out, g)
	}
	slices.SortFunc(out, func(a, b Goroutine) int { return a.Since.Compare(b.Since) })
	return out
}
