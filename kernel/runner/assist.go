package runner

import (
	"fmt"
	"os"
	"slices"
	"strings"
	"time"

	"levelsum/display"
	"levelsum/kernel/assist"
	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
	"levelsum/kernel/symbols"
	"levelsum/kernel/symbols/export"
)

// complete answers how a cell can go on.
func (r *Runner) complete(source string, cursor int) *engine.Completion {
	c := assist.Complete(texted{r.scope}, source, cursor)
	out := &engine.Completion{Start: c.Start, End: c.End}
	for _, m := range c.Matches {
		out.Matches = append(out.Matches, engine.Match{Text: cell.Unmark(m.Text), Kind: m.Kind, Signature: cell.Unmark(m.Signature)})
	}
	return out
}

// inspect answers what stands at the cursor; nil if that is not known.
func (r *Runner) inspect(source string, cursor, detail int) map[string]any {
	d, ok := assist.Inspect(valued{r.scope, r}, r.docs, source, cursor, detail)
	if !ok {
		return nil
	}
	return map[string]any{"text/plain": cell.Unmark(d.Text), "text/markdown": cell.Unmark(d.Markdown)}
}

// newDocs finds documentation where the packages that cells import come from.
func newDocs(source export.Source) *assist.Docs {
	var t *compile.Types
	switch s := source.(type) {
	case *compile.Kit:
		t = s.Types
	case *compile.Types:
		t = s
	default:
		return assist.NewDocs("", "", "")
	}
	d := assist.NewDocs(t.Manifest.GOROOT, "levelsum", t.Manifest.Source)
	d.Stored = t.DocsDir()
	return d
}

// valued is the session's scope with what its variables hold.
type valued struct {
	*cell.Scope
	r *Runner
}

// A value is shown up to valueLimit bytes, if that takes no longer than
// valueTime: showing it may run the user's own code.
const (
	valueLimit = 400
	valueTime  = 100 * time.Millisecond
)

// ValueOf returns the value of a session variable as text.
func (v valued) ValueOf(name string) (text string, number int, ok bool) {
	slot := v.Slot(name)
	if slot == nil {
		return "", 0, false
	}
	value := v.r.slots.value(slot.ID)
	shown := make(chan string, 1)
	go func() {
		defer func() {
			if p := recover(); p != nil {
				shown <- fmt.Sprintf("(cannot be shown: %v)", p)
			}
		}()
		text, _ := display.ViewOf(value).Data["text/plain"].(string)
		shown <- text
	}()
	select {
	case text = <-shown:
	case <-time.After(valueTime):
		text = "(takes long to show)"
	}
	if len(text) > valueLimit {
		text = strings.ToValidUTF8(text[:valueLimit], "") + " ..."
	}
	return text, slot.Cell, true
}

// texted is the session's scope with what some functions take as text.
type texted struct{ *cell.Scope }

// atMostFiles is how many files of a folder are offered.
const atMostFiles = 500

// Texts lists the library's molecules for the functions that find one, and the
// files of the session's folder for those that read one.
func (texted) Texts(path, function string) []string {
	switch path + "." + function {
	case "levelsum/statmech/gas.FromLibrary", "levelsum/statmech/gas.Find":
		if f, ok := symbols.Table()["levelsum/statmech/gas/gas"]["Library"]; ok {
			names, _ := f.Call(nil)[0].Interface().([]string)
			return names
		}
	case "levelsum/statmech/data.Read", "levelsum/statmech/gas.Open", "os.Open", "os.ReadFile":
		d, err := os.Open(".")
		if err != nil {
			return nil
		}
		defer d.Close()
		names, _ := d.Readdirnames(atMostFiles)
		names = slices.DeleteFunc(names, func(n string) bool { return strings.HasPrefix(n, ".") })
		slices.Sort(names)
		return names
	}
	return nil
}
