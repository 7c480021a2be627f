//go:build ignore

// Accuracy writes ACCURACY.md from what the tests find. It runs the tests of
// this folder's packages and takes every line that a test logs as
//
//	accuracy: what | where it was looked for | measure | largest difference found | bound | compared with
//
// so that a table line cannot say anything that no test has seen.
package main

import (
	"bufio"
	"bytes"
	"encoding/json"
	"fmt"
	"log"
	"os"
	"os/exec"
	"slices"
	"strconv"
	"strings"
)

// A line is one line of the table.
type line struct {
	packageName, test string
	fields            []string
}

const head = `# Accuracy

Made by "go generate ./statmech" from a run of the tests: each line is what the named test found, and the test fails if the difference passes the bound. Differences are rounded to two digits; they are those of linux/amd64. eps is 2⁻⁵². These are errors of computing, not of the models, except where a line compares with a published table. TestX of package p is run by "go test ./statmech/p -run TestX -v".
`

func main() {
	log.SetFlags(0)
	log.SetPrefix("accuracy: ")
	cmd := exec.Command("go", "test", "-json", "./...")
	cmd.Stderr = os.Stderr
	out, err := cmd.Output()
	var lines []line
	s := bufio.NewScanner(bytes.NewReader(out))
	s.Buffer(nil, 1<<20)
	for s.Scan() {
		var event struct{ Action, Package, Test, Output string }
		if err := json.Unmarshal(s.Bytes(), &event); err != nil {
			log.Fatal(err)
		}
		if event.Action == "fail" {
			log.Printf("%s %s failed", event.Package, event.Test)
		}
		_, text, ok := strings.Cut(strings.TrimSpace(event.Output), ".go:")
		if !ok {
			continue
		}
		if _, text, ok = strings.Cut(text, " accuracy: "); !ok {
			continue
		}
		fields := split(text)
		if len(fields) != 6 {
			log.Fatalf("%s: %d fields in %q, want 6", event.Test, len(fields), text)
		}
		found, err := strconv.ParseFloat(fields[3], 64)
		if err != nil {
			log.Fatalf("%s: %q: %v", event.Test, text, err)
		}
		fields[3] = strconv.FormatFloat(found, 'g', 2, 64)
		test, _, _ := strings.Cut(event.Test, "/")
		_, name, _ := strings.Cut(event.Package, "/")
		lines = append(lines, line{name, test, fields})
	}
	if err != nil {
		log.Fatal("the tests failed; nothing was written: ", err)
	}
	slices.SortFunc(lines, func(a, b line) int {
		return strings.Compare(a.packageName+"\x00"+strings.Join(a.fields[:2], "\x00"), b.packageName+"\x00"+strings.Join(b.fields[:2], "\x00"))
	})
	var b strings.Builder
	b.WriteString(head)
	last := ""
	for _, l := range lines {
		if l.packageName != last {
			fmt.Fprintf(&b, "\n## %s\n\n| what | where | difference | largest found | bound | compared with | test |\n| --- | --- | --- | ---: | ---: | --- | --- |\n", l.packageName)
			last = l.packageName
		}
		f := l.fields
		fmt.Fprintf(&b, "| %s | %s | %s | %s | %s | %s | `%s` |\n", f[0], f[1], f[2], f[3], f[4], f[5], l.test)
	}
	if err := os.WriteFile("ACCURACY.md", []byte(b.String()), 0o666); err != nil {
		log.Fatal(err)
	}
}

// split cuts at the bars that no backslash stands before.
func split(text string) []string {
	var fields []string
	for _, f := range strings.Split(strings.ReplaceAll(text, `\|`, "\x00"), "|") {
		fields = append(fields, strings.ReplaceAll(strings.TrimSpace(f), "\x00", `\|`))
	}
	return fields
}
