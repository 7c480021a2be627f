package rerun

import (
	"errors"
	"maps"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/kernel/notebook"
)

// A recorder keeps what cells show as the outputs of a document. A cell may
// still write while the next one runs, so all cells share one lock.
type recorder struct {
	mu      sync.Mutex // guards the rest
	outputs map[int][]notebook.Output
	clear   map[int]bool       // cells whose outputs go when the next one comes
	places  map[string][]place // where a display id is shown
	over    bool

	hint func(text string)
}

type place struct{ cell, at int }

// cellOutput is the engine.Output of one cell.
type cellOutput struct {
	r *recorder
	n int
}

func (r *recorder) cell(n int) cellOutput { return cellOutput{r, n} }

// add appends an output to a cell: a stream to the stream of the same name
// that ends the list, if one does.
func (r *recorder) add(cell int, o notebook.Output) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.addLocked(cell, o)
}

func (r *recorder) addLocked(cell int, o notebook.Output) {
	if r.over {
		return
	}
	if r.outputs == nil {
		r.outputs, r.clear = map[int][]notebook.Output{}, map[int]bool{}
	}
	if r.clear[cell] {
		delete(r.clear, cell)
		r.drop(cell)
	}
	list := r.outputs[cell]
	if n := len(list); o.Kind == notebook.Stream && n > 0 && list[n-1].Kind == notebook.Stream && list[n-1].Name == o.Name {
		list[n-1].Text += o.Text
		return
	}
	r.outputs[cell] = append(list, o)
}

// drop takes the outputs of a cell away.
func (r *recorder) drop(cell int) {
	delete(r.outputs, cell)
	for id, places := range r.places {
		r.places[id] = slices.DeleteFunc(places, func(p place) bool { return p.cell == cell })
	}
}

// finish returns the outputs by cell; what is written later is lost.
func (r *recorder) finish() map[int][]notebook.Output {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.over = true
	return maps.Clone(r.outputs)
}

func (c cellOutput) Stream(name, text string) {
	if text != "" {
		c.r.add(c.n, notebook.Output{Kind: notebook.Stream, Name: name, Text: text})
	}
}

func (c cellOutput) Show(v display.View, id string, replace bool) {
	if display.Transient(v) { // a progress line, which is gone at the end
		return
	}
	c.r.mu.Lock()
	defer c.r.mu.Unlock()
	o := notebook.Output{Kind: notebook.DisplayData, Data: v.Data, Metadata: unmarked(v.Metadata)}
	if replace && id != "" {
		for _, p := range c.r.places[id] {
			old := c.r.outputs[p.cell][p.at]
			o.Kind, o.Count = old.Kind, old.Count
			c.r.outputs[p.cell][p.at] = o
		}
		return
	}
	c.r.addLocked(c.n, o)
	if id != "" && !c.r.over {
		c.r.places[id] = append(c.r.places[id], place{c.n, len(c.r.outputs[c.n]) - 1})
	}
}

// Hint passes on what is of interest only now.
func (c cellOutput) Hint(text string) {
	if c.r.hint != nil {
		c.r.hint(text)
	}
}

func (c cellOutput) Clear(wait bool) {
	c.r.mu.Lock()
	defer c.r.mu.Unlock()
	if wait {
		if len(c.r.outputs[c.n]) > 0 {
			c.r.clear[c.n] = true
		}
		return
	}
	c.r.drop(c.n)
}

// errNoReader answers a cell that asks for a line.
var errNoReader = errors.New("the notebook runs without a reader who could answer")

func (c cellOutput) Ask(string, bool) (string, error) { return "", errNoReader }
