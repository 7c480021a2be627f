package main

import (
	"os/exec"
	"strings"
	"syscall"
	"testing"

	"levelsum/kernel/compile/kittest"
)

// leaving is every way in which a kernel ends, while a cell runs that ends only
// when it is told to, and while one runs that cannot be told.
func leaving(t *testing.T, host *kittest.Host) {
	for _, way := range []struct {
		name  string
		leave func(t *testing.T, p *process, f *front, parent *exec.Cmd)
	}{
		{"SIGTERM", func(_ *testing.T, p *process, _ *front, _ *exec.Cmd) { p.cmd.Process.Signal(syscall.SIGTERM) }},
		{"SIGHUP", func(_ *testing.T, p *process, _ *front, _ *exec.Cmd) { p.cmd.Process.Signal(syscall.SIGHUP) }},
		{"parent gone", func(_ *testing.T, _ *process, _ *front, parent *exec.Cmd) {
			parent.Process.Kill()
			parent.Wait()
		}},
		{"shutdown", func(t *testing.T, _ *process, f *front, _ *exec.Cmd) {
			if a := f.ask("shutdown_request", map[string]any{"restart": false}); a.Reply["restart"] != false {
				t.Errorf("reply %v", a.Reply)
			}
		}},
		{"restart", func(t *testing.T, _ *process, f *front, _ *exec.Cmd) {
			if a := f.ask("shutdown_request", map[string]any{"restart": true}); a.Reply["restart"] != true {
				t.Errorf("reply %v", a.Reply)
			}
		}},
	} {
		for name, src := range map[string]string{
			"idle":  "fmt.Println(\"go\")",
			"loop":  "fmt.Println(\"go\")\nfor {}",
			"stuck": "var mu sync.Mutex\nmu.Lock()\nfmt.Println(\"go\")\nmu.Lock()",
			"child": "import \"os/exec\"\nfmt.Println(\"go\")\nexec.Command(\"sleep\", \"1000\").Run()",
		} {
			t.Run(way.name+" "+name, func(t *testing.T) {
				t.Parallel()
				parent := exec.Command("sleep", "1000")
				if err := parent.Start(); err != nil {
					t.Fatal(err)
				}
				t.Cleanup(func() { parent.Process.Kill() })
				p := serveReal(t, host, "", []string{"JPY_PARENT_PID=" + itoa(parent.Process.Pid)})
				f := p.connectFront()
				id := f.post(src)
				f.until(id, "output", func(a answer) bool { return a.Streams["stdout"] != "" })
				if name == "idle" {
					f.end(id)
				}
				child := p.child()
				way.leave(t, p, f, parent)
				p.wantEnd(child, way.name == "restart")
				if name == "loop" {
					// The last reply has been delivered.
					if a := f.end(id); a.Reply["status"] != "error" {
						t.Errorf("the running cell is answered by %v", a.Reply)
					}
				}
				if s := p.stderr.String(); strings.Contains(s, "panic") || strings.Contains(s, "goroutine") {
					t.Errorf("standard error: %s", s)
				}
			})
		}
	}
}
