// Host opens the plugins named by its arguments, one after the other, calls
// what each exports as Run with the result of the one before, and prints the
// result, or the panic with the frames whose file is a cell.
package main

import (
	"fmt"
	"os"
	"plugin"
	"runtime"
	"strings"

	"levelsum/display"
	"levelsum/kernel/compile"
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func main() {
	var last any
	for _, file := range os.Args[1:] {
		p, err := plugin.Open(file)
		if err != nil {
			fmt.Println("open:", compile.Explain(err))
			os.Exit(1)
		}
		s, err := p.Lookup("Symbols")
		if err != nil {
			fmt.Println("lookup:", err)
			os.Exit(1)
		}
		symbols := *s.(*map[string]any)
		last = call(symbols["Run"].(func(any) any), last)
		if m, ok := last.(statmech.Mode); ok {
			fmt.Println("mode:", m.Reduced(unit.Temperature(300)).LogQ)
		}
		if v, ok := last.(display.Viewer); ok {
			fmt.Println("view:", v.View().Data["text/plain"])
		}
		fmt.Printf("%T: %v\n", last, last)
	}
}

func call(f func(any) any, x any) (y any) {
	defer func() {
		if r := recover(); r != nil {
			fmt.Printf("panic (%T): %v\n", r, r)
			pc := make([]uintptr, 100)
			frames := runtime.CallersFrames(pc[:runtime.Callers(1, pc)])
			for {
				f, more := frames.Next()
				if strings.HasPrefix(f.File, "In[") {
					fmt.Printf("%s:%d %s\n", f.File, f.Line, f.Function)
				}
				if !more {
					break
				}
			}
			y = nil
		}
	}()
	return f(x)
}
