package main

import (
	"bytes"
	"encoding/json"
	"flag"
	"fmt"
	"go/ast"
	"go/build"
	"go/doc/comment"
	"go/parser"
	"go/token"
	"io"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/kernel/compile"
	"levelsum/kernel/compile/kittest"
)

var update = flag.Bool("update", false, "write the picture of the README anew")

// elsewhere has the lines of the documents that this test does not run, and
// what the gate, .ci/run, has for each.
var elsewhere = map[string]string{
	"./install.sh":        "./install.sh",
	"./install.sh --lab":  "", // opens a browser
	"go test ./...":       "./...; }",
	".ci/run":             "steps=",
	".ci/run staticcheck": "staticcheck()",
}

// A fence is a block of code of a document.
type fence struct {
	language, text string
	line           int
}

// fences are the blocks of a Markdown text between lines of three backticks.
func fences(text string) (out []fence) {
	open := false
	for i, l := range strings.Split(text, "\n") {
		switch language, mark := strings.CutPrefix(l, "```"); {
		case mark && !open:
			out = append(out, fence{language: language, line: i + 1})
			open = true
		case mark:
			open = false
		case open:
			out[len(out)-1].text += l + "\n"
		}
	}
	return out
}

// TestDocuments runs the code of README.md and DEVELOPERS.md as a reader
// would. Blocks of Go are cells of one notebook, my-first.ipynb, or, if they
// begin with a package clause, the main.go of a program; the lines of sh blocks
// run in order in the folder with both; what a text block says must be among
// what they print.
func TestDocuments(t *testing.T) {
	host, err := kittest.Make(t.Context(), t.TempDir(), "./kernel/levelsum", compile.Race)
	if err != nil {
		t.Fatal(err)
	}
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	gate, err := os.ReadFile(filepath.Join(root, ".ci", "run"))
	if err != nil {
		t.Fatal(err)
	}
	home := t.TempDir()
	if err := os.Symlink(root, filepath.Join(home, "levelsum")); err != nil {
		t.Fatal(err)
	}
	env := append(host.Env(), "HOME="+home, "GOFLAGS=-mod=mod", "GOPROXY=off", "GONOSUMDB=*", "GONOSUMCHECK=1", "GOWORK=off",
		"PATH="+filepath.Dir(host.Exe)+string(os.PathListSeparator)+os.Getenv("PATH"))
	for _, name := range []string{"GOMODCACHE", "GOCACHE"} { // below the true home
		value, err := exec.Command("go", "env", name).Output()
		if err != nil {
			t.Fatal(err)
		}
		env = append(env, name+"="+strings.TrimSpace(string(value)))
	}
	for _, name := range []string{"README.md", "DEVELOPERS.md"} {
		t.Run(name, func(t *testing.T) {
			document, err := os.ReadFile(filepath.Join(root, name))
			if err != nil {
				t.Fatal(err)
			}
			dir := t.TempDir()
			var cells []string
			var lines []fence
			for _, f := range fences(string(document)) {
				switch f.language {
				case "go":
					if strings.HasPrefix(f.text, "package ") {
						write(t, filepath.Join(dir, "main.go"), []byte(f.text))
						break
					}
					cells = append(cells, f.text)
				case "sh":
					for i, l := range strings.Split(f.text, "\n") {
						l, _, _ = strings.Cut(l, " #")
						if l = strings.TrimSpace(l); l != "" {
							lines = append(lines, fence{text: l, line: f.line + 1 + i})
						}
					}
				case "text": // below
				default:
					t.Errorf("line %d: a block whose language %q is not go, sh or text", f.line, f.language)
				}
			}
			if len(cells) > 0 {
				write(t, filepath.Join(dir, "my-first.ipynb"), newNotebook(t, cells))
			}
			var printed bytes.Buffer
			for _, l := range lines {
				if inGate, ok := elsewhere[l.text]; ok {
					if !bytes.Contains(gate, []byte(inGate)) {
						t.Errorf("line %d: %s: .ci/run does not have %q", l.line, l.text, inGate)
					}
					continue
				}
				var stderr bytes.Buffer
				cmd := exec.CommandContext(t.Context(), "sh", "-c", l.text)
				cmd.Dir, cmd.Env = dir, env
				cmd.Stdout, cmd.Stderr = &printed, &stderr
				if err := cmd.Run(); err != nil {
					t.Errorf("line %d: %s: %v\n%s%s", l.line, l.text, err, printed.String(), stderr.String())
				}
			}
			for _, f := range fences(string(document)) {
				if f.language == "text" && !strings.Contains(printed.String(), f.text) {
					t.Errorf("line %d: nothing prints\n%s\nbut\n%s", f.line, f.text, printed.String())
				}
			}
		})
	}
}

// newNotebook is a notebook of code cells without outputs.
func newNotebook(t *testing.T, cells []string) []byte {
	var list []any
	for i, c := range cells {
		list = append(list, map[string]any{
			"cell_type": "code", "id": fmt.Sprintf("c%d", i), "metadata": map[string]any{},
			"execution_count": nil, "outputs": []any{}, "source": strings.TrimSuffix(c, "\n"),
		})
	}
	data, err := json.Marshal(map[string]any{"nbformat": 4, "nbformat_minor": 5, "metadata": map[string]any{}, "cells": list})
	if err != nil {
		t.Fatal(err)
	}
	return data
}

func write(t *testing.T, name string, data []byte) {
	t.Helper()
	if err := os.WriteFile(name, data, 0o666); err != nil {
		t.Fatal(err)
	}
}

// TestDocumentsName looks up what the documents name in running text: the
// subcommands of levelsum with their flags, folders and files, packages of go
// doc and go generate, tests, notebooks.
func TestDocumentsName(t *testing.T) {
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	exists := func(name string) bool {
		for _, below := range []string{"", "kernel", "statmech", "kernel/runner", "kernel/levelsum", ".ci", ".ci/bench.d"} {
			if _, err := os.Stat(filepath.Join(root, below, filepath.FromSlash(name))); err == nil {
				return true
			}
		}
		p, err := build.Import(name, "", build.FindOnly)
		return err == nil && p.Goroot // a package of the standard library
	}
	tests := testsOf(t, root)
	placeholder := regexp.MustCompile(`^\.?[A-Z]+(\.[a-z]+)?$`) // NOTEBOOK, FILE.html
	code := regexp.MustCompile("`([^`]+)`")
	for _, name := range []string{"README.md", "DEVELOPERS.md"} {
		document, err := os.ReadFile(filepath.Join(root, name))
		if err != nil {
			t.Fatal(err)
		}
		fenced := false
		for i, line := range strings.Split(string(document), "\n") {
			if strings.HasPrefix(line, "```") {
				fenced = !fenced
			}
			if fenced {
				continue
			}
			command := "" // the one that flags in this line belong to
			for _, m := range code.FindAllStringSubmatch(line, -1) {
				bad := func(format string, a ...any) {
					t.Errorf("%s:%d: `%s`: %s", name, i+1, m[1], fmt.Sprintf(format, a...))
				}
				words := strings.Fields(m[1])
				if words[0] == "levelsum" && len(words) > 1 && words[1] != "COMMAND" {
					command = words[1]
					if commands[command] == nil {
						bad("no such command")
						continue
					}
				}
				if inRow := strings.HasPrefix(line, "|"); command != "" && (inRow || words[0] == "levelsum") {
					for _, flag := range words {
						if strings.HasPrefix(flag, "-") && !strings.Contains(helpOf(command), flag) {
							bad("levelsum %s -h does not have %s", command, flag)
						}
					}
				}
				switch {
				case words[0] == "go" && len(words) > 2 && (words[1] == "doc" || words[1] == "generate"):
					if !exists(words[len(words)-1]) {
						bad("no such package")
					}
				case len(words) > 1 || placeholder.MatchString(filepath.Base(m[1])) || strings.ContainsAny(m[1], "<*"):
				case strings.HasPrefix(m[1], "Test"):
					if !tests["."][m[1]] {
						bad("no such test")
					}
				case strings.Contains(m[1], "/") && !strings.HasPrefix(m[1], "//"):
					if !exists(m[1]) {
						bad("no such file or folder")
					}
				case strings.Contains(m[1], "-") && !strings.ContainsAny(m[1], "(.") && !strings.HasPrefix(m[1], "-"):
					if !exists("notebooks/" + m[1] + ".ipynb") {
						bad("no such notebook")
					}
				}
			}
		}
	}
}

// helpOf is what levelsum COMMAND -h prints.
func helpOf(name string) string {
	var out bytes.Buffer
	commands[name]([]string{"-h"}, nil, io.Writer(&out), io.Writer(&out))
	return out.String()
}

var testFunc = regexp.MustCompile(`(?m)^func ((?:Test|Fuzz|Benchmark|Example)\w*)\(`)

// testsOf has the tests of each folder of the module, and of all under ".".
func testsOf(t *testing.T, root string) map[string]map[string]bool {
	all := map[string]map[string]bool{".": {}}
	eachFile(t, root, "_test.go", func(file, text string) {
		dir := filepath.Dir(file)
		if all[dir] == nil {
			all[dir] = map[string]bool{}
		}
		for _, m := range testFunc.FindAllStringSubmatch(text, -1) {
			all[dir][m[1]], all["."][m[1]] = true, true
		}
	})
	return all
}

// eachFile calls f with each file below root whose name ends so.
func eachFile(t *testing.T, root, end string, f func(file, text string)) {
	t.Helper()
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() && (d.Name() == ".git" || d.Name() == "testdata") {
			if err == nil {
				err = filepath.SkipDir
			}
			return err
		}
		if d.IsDir() || !strings.HasSuffix(path, end) {
			return nil
		}
		text, err := os.ReadFile(path)
		if err == nil {
			f(path, string(text))
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
}

// TestCommentsName: each test that a comment names as the one that keeps an
// accuracy or a behaviour is there.
func TestCommentsName(t *testing.T) {
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	tests := testsOf(t, root)
	named := regexp.MustCompile(`\b(?:Test|Fuzz|Benchmark)[A-Z]\w*`)
	n := 0
	eachFile(t, root, ".go", func(file, text string) {
		for i, l := range strings.Split(text, "\n") {
			_, comment, ok := strings.Cut(l, "//")
			if !ok {
				continue
			}
			for _, name := range named.FindAllString(comment, -1) {
				n++
				if !tests["."][name] {
					rel, _ := filepath.Rel(root, file)
					t.Errorf("%s:%d: there is no %s", rel, i+1, name)
				}
			}
		}
	})
	if n < 50 {
		t.Errorf("only %d tests named in comments: the search is broken", n)
	}
}

// TestCommentCode: what the code in comments of the packages for cells calls is
// there, and each of these packages has an example that runs.
func TestCommentCode(t *testing.T) {
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	exported := map[string]map[string]bool{} // by the package's name
	examples := map[string]bool{}
	type code struct{ file, text string }
	var codes []code
	for _, below := range []string{"statmech", "display"} {
		eachFile(t, filepath.Join(root, below), ".go", func(file, text string) {
			rel, _ := filepath.Rel(root, file)
			if strings.Contains(rel, "internal") || strings.Contains(rel, filepath.Join("special", "gen")) || strings.HasPrefix(text, "//go:build ignore") {
				return
			}
			f, err := parser.ParseFile(token.NewFileSet(), file, text, parser.ParseComments)
			if err != nil {
				t.Error(err)
				return
			}
			name := strings.TrimSuffix(f.Name.Name, "_test")
			if strings.HasSuffix(file, "_test.go") {
				examples[name] = examples[name] || strings.Contains(text, "\nfunc Example") && strings.Contains(text, "// Output:")
				return
			}
			if exported[name] == nil {
				exported[name] = map[string]bool{}
			}
			for _, d := range f.Decls {
				for _, n := range declaredNames(d) {
					exported[name][n] = true
				}
			}
			var p comment.Parser
			for _, g := range f.Comments {
				for _, block := range p.Parse(g.Text()).Content {
					if c, ok := block.(*comment.Code); ok {
						codes = append(codes, code{rel, c.Text})
					}
				}
			}
		})
	}
	call := regexp.MustCompile(`\b([a-z]+)\.([A-Z]\w*)`)
	n := 0
	for _, c := range codes {
		for _, m := range call.FindAllStringSubmatch(c.text, -1) {
			if names := exported[m[1]]; names != nil {
				n++
				if !names[m[2]] {
					t.Errorf("%s: code in a comment has %s, which is not there", c.file, m[0])
				}
			}
		}
	}
	if n < 20 {
		t.Errorf("only %d names in comments' code: the search is broken", n)
	}
	for name := range exported {
		if name != "draw" && !examples[name] {
			t.Errorf("package %s has no example with an output", name)
		}
	}
}

// declaredNames are the exported names of a declaration at the top of a file.
func declaredNames(d ast.Decl) (names []string) {
	switch d := d.(type) {
	case *ast.FuncDecl:
		if d.Recv == nil {
			names = append(names, d.Name.Name)
		}
	case *ast.GenDecl:
		for _, s := range d.Specs {
			switch s := s.(type) {
			case *ast.TypeSpec:
				names = append(names, s.Name.Name)
			case *ast.ValueSpec:
				for _, id := range s.Names {
					names = append(names, id.Name)
				}
			}
		}
	}
	return names
}

// TestPicture: the picture of the README is the one that the notebook stores.
func TestPicture(t *testing.T) {
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	const name = "copper-heat-capacity"
	file := filepath.Join(root, "notebooks", name+".svg")
	picture, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	for _, data := range storedOutputs(t, filepath.Join(root, "notebooks", name+".ipynb")) {
		svg := data["image/svg+xml"]
		switch {
		case svg == "":
			continue
		case *update:
			write(t, file, []byte(svg))
		case svg != string(picture):
			t.Errorf("%s is not the notebook's first figure: go test ./kernel/levelsum -run TestPicture -update", file)
		}
		return
	}
	t.Errorf("%s.ipynb stores no figure", name)
}

// storedOutputs are the texts that a notebook's outputs hold, by media type;
// what is no text is there and empty.
func storedOutputs(t *testing.T, file string) (all []map[string]string) {
	t.Helper()
	stored, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	var nb struct {
		Cells []struct {
			Outputs []struct {
				Data map[string]any
			}
		}
	}
	if err := json.Unmarshal(stored, &nb); err != nil {
		t.Fatal(err)
	}
	for _, c := range nb.Cells {
		for _, o := range c.Outputs {
			texts := map[string]string{}
			for media, v := range o.Data {
				texts[media] = ""
				lines, _ := v.([]any)
				for _, l := range lines {
					text, _ := l.(string)
					texts[media] += text
				}
				if text, ok := v.(string); ok {
					texts[media] = text
				}
			}
			all = append(all, texts)
		}
	}
	return all
}

// storedResults are the lines of the named results that a notebook stores.
func storedResults(t *testing.T, file string) (lines []string) {
	t.Helper()
	for _, data := range storedOutputs(t, file) {
		if _, ok := data[display.ResultMediaType]; ok {
			lines = append(lines, data["text/plain"])
		}
	}
	return lines
}
