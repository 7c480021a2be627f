package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/kernel/compile/kittest"
)

// TestInstallStops: what install.sh says where something is missing, before it
// writes anything. That it installs and removes is a step of the gate.
func TestInstallStops(t *testing.T) {
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	tools := t.TempDir() // a PATH of what every system has
	for _, name := range []string{"bash", "sh", "env", "dirname", "sed", "cat", "mkdir", "mktemp", "rm", "grep", "head", "cmp", "cp", "mv", "id"} {
		path, err := exec.LookPath(name)
		if err != nil {
			t.Fatal(err)
		}
		if err := os.Symlink(path, filepath.Join(tools, name)); err != nil {
			t.Fatal(err)
		}
	}
	// goCommand is a folder with a go command of its own.
	goCommand := func(script string) string {
		dir := t.TempDir()
		if err := os.WriteFile(filepath.Join(dir, "go"), []byte("#!/bin/sh\n"+script), 0o777); err != nil {
			t.Fatal(err)
		}
		return dir
	}
	const good = "case \"$*\" in\n'env GOVERSION') echo go1.26.8;;\n'env CC') echo no-such-compiler;;\n'env GOBIN') ;;\n"
	for _, test := range []struct {
		name, dir, args string
		home            bool
		status          int
		want            []string
	}{
		{"misuse", tools, "--everything", true, 2, []string{"usage: ./install.sh [--lab | --remove]"}},
		{"no home", tools, "", false, 1, []string{"HOME is not set"}},
		{"no Go", tools, "", true, 1, []string{"Go 1.26 or newer is needed and not found", "https://go.dev/dl/"}},
		{"old Go", goCommand("echo go1.20.14"), "", true, 1, []string{"Go 1.26 or newer is needed; this is go1.20.14"}},
		{"Go that refuses", goCommand("echo 'go.mod requires go >= 1.26 (running go 1.24.1)' >&2; exit 1"), "", true, 1,
			[]string{"cannot build Levelsum", "running go 1.24.1", "GOTOOLCHAIN=auto"}},
		{"no C compiler", goCommand(good + "esac"), "", true, 1, []string{"a C compiler is needed", "no-such-compiler", "xcode-select --install"}},
		{"no network", goCommand(strings.Replace(good, "no-such-compiler", "sh", 1) +
			"'env GOMODCACHE') echo modules;;\n*) echo 'go: downloading x' >&2; for i in 1 2 3 4 5 6 7; do echo \"line $i\" >&2; done; exit 1;;\nesac"), "", true, 1,
			[]string{"line 1\nline 2\nline 3\nline 4\nline 5\ninstall.sh: levelsum could not be built", "the first build needs a network", "from modules.", "GOCACHE and GOMODCACHE"}},
		{"nothing to remove", tools, "--remove", true, 0, []string{"there is no ", "/.local/bin/levelsum"}},
		{"help", tools, "--help", true, 0, []string{"./install.sh --remove  take away"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			home := t.TempDir()
			cmd := exec.CommandContext(t.Context(), filepath.Join(root, "install.sh"), strings.Fields(test.args)...)
			cmd.Env = []string{"PATH=" + test.dir + string(os.PathListSeparator) + tools}
			if test.home {
				cmd.Env = append(cmd.Env, "HOME="+home)
			}
			out, _ := cmd.CombinedOutput()
			if status := cmd.ProcessState.ExitCode(); status != test.status {
				t.Errorf("status %d, want %d", status, test.status)
			}
			for _, w := range test.want {
				if !strings.Contains(string(out), w) {
					t.Errorf("it does not say %q but\n%s", w, out)
				}
			}
			if installed, _ := filepath.Glob(filepath.Join(home, ".local", "bin", "*")); len(installed) > 0 {
				t.Errorf("it wrote %v", installed)
			}
		})
	}
}
