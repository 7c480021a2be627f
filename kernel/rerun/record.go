package rerun

import (
	"errors"
	"maps"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/notebook"
)

// A recorder keeps what cells show as the outputs of a document. A cell may
// still write while the next one runs, so all cells share one lock.
type recorder struct {
	mu      sync.Mutex // guards the rest
	outputs map[int][]notebook.Output
	clear   map[int]bool       // cells whose outputs go when the next one comes
	places  map[string][]place // where a display id is shown
	limits  map[int]*engine.Limit
	growing map[int][]byte // what the stream that ends the list of a cell goes on with
	over    bool

	hint     func(text string)
	progress func(text string)
}

type place struct{ cell, at int }

// cellOutput is the engine.Output of one cell.
type cellOutput struct {
	r *recorder
	n int
}

func (r *recorder) cell(n int) cellOutput { return cellOutput{r, n} }

// add appends an output to a cell.
func (r *recorder) add(cell int, o notebook.Output) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.addLocked(cell, o)
}

func (r *recorder) addLocked(cell int, o notebook.Output) {
	if r.over {
		return
	}
	r.begin(cell)
	r.release(cell)
	r.settle(cell)
	r.outputs[cell] = append(r.outputs[cell], o)
}

// begin clears a cell that was to be cleared when something new comes.
func (r *recorder) begin(cell int) {
	if r.outputs == nil {
		r.outputs, r.clear = map[int][]notebook.Output{}, map[int]bool{}
		r.limits, r.growing = map[int]*engine.Limit{}, map[int][]byte{}
	}
	if r.clear[cell] {
		delete(r.clear, cell)
		r.drop(cell)
	}
	if r.limits[cell] == nil {
		l := engine.NewLimit()
		r.limits[cell] = &l
	}
}

// print adds as much text as the limit of a cell allows; what is held back is
// added by release.
func (r *recorder) print(cell int, name, text string) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.over {
		return
	}
	r.begin(cell)
	now, notice := r.limits[cell].Add(name, text)
	r.stream(cell, name, now)
	r.stream(cell, "stderr", notice)
}

// stream appends text to the stream of its name that ends the list of a cell,
// if one does.
func (r *recorder) stream(cell int, name, text string) {
	if text == "" {
		return
	}
	list := r.outputs[cell]
	if n := len(list); n == 0 || list[n-1].Kind != notebook.Stream || list[n-1].Name != name {
		r.settle(cell)
		r.outputs[cell] = append(r.outputs[cell], notebook.Output{Kind: notebook.Stream, Name: name})
	}
	r.growing[cell] = append(r.growing[cell], text...)
}

// release adds the last part of what was held back.
func (r *recorder) release(cell int) {
	if l := r.limits[cell]; l != nil {
		notice, last := l.Rest()
		r.stream(cell, "stderr", notice)
		for _, p := range last {
			r.stream(cell, p.Name, string(p.Text))
		}
	}
}

// settle gives the stream that ends the list of a cell its text.
func (r *recorder) settle(cell int) {
	if text := r.growing[cell]; len(text) > 0 {
		list := r.outputs[cell]
		list[len(list)-1].Text += string(text)
		delete(r.growing, cell)
	}
}

// end says that a cell is over; what its goroutines print later has a limit of
// its own.
func (r *recorder) end(cell int) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if l := r.limits[cell]; l != nil {
		r.release(cell)
		l.More(engine.TailBytes)
	}
}

// drop takes the outputs of a cell away.
func (r *recorder) drop(cell int) {
	delete(r.outputs, cell)
	delete(r.limits, cell)
	delete(r.growing, cell)
	for id, places := range r.places {
		r.places[id] = slices.DeleteFunc(places, func(p place) bool { return p.cell == cell })
	}
}

// finish returns the outputs by cell; what is written later is lost.
func (r *recorder) finish() map[int][]notebook.Output {
	r.mu.Lock()
	defer r.mu.Unlock()
	for cell := range r.outputs {
		r.release(cell)
		r.settle(cell)
	}
	r.over = true
	return maps.Clone(r.outputs)
}

func (c cellOutput) Stream(name, text string) {
	if text != "" {
		c.r.print(c.n, name, text)
	}
}

func (c cellOutput) Show(v display.View, id string, replace bool) {
	if display.Transient(v) { // a progress line, which is gone at the end
		if text, ok := v.Data["text/plain"].(string); ok && c.r.progress != nil {
			c.r.progress(text)
		}
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
