package main

import (
	"bytes"
	"context"
	"encoding/json"
	"encoding/xml"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"
	"text/tabwriter"
	"time"

	"levelsum/kernel/rerun"
)

const checkUsage = `usage: levelsum check [flags] NOTEBOOK...

Runs each notebook in a fresh engine and compares what it gives with what is
stored in it: named results by value and uncertainty, tables cell by cell,
figures and texts by their numbers, data files by their content, seeds. It is
noted, and no difference by itself, when versions, platform, constants or
conventions are others than those stored, and when the stored notebook was not
run from top to bottom. Nothing is written to the notebook.

  -json
        Print the comparison as JSON.
  -junit
        Print the comparison as JUnit XML.
  -keep-going, -limit DURATION, -memory SIZE, -native
        As for levelsum run. With -native the numbers of compiled cells are
        compared with stored ones that were partly interpreted.

  identical       the same
  rounding-level  relative 1e-9, or absolute below 1e-12 of the scale
  inside u        within one standard uncertainty of the stored result
  noted           see above
  moved, new, missing

The exit status is 0 if everything is identical, rounding-level, inside u or
noted, 1 if not or if a cell failed, 2 on misuse.
`

// A checked notebook.
type checked struct {
	File     string          `json:"file"`
	OK       bool            `json:"ok"`
	Cells    int             `json:"cells"`
	Failures []string        `json:"failures,omitempty"`
	NotRun   int             `json:"not_run,omitempty"`
	Findings []rerun.Finding `json:"findings"`

	took time.Duration
}

// check is "levelsum check".
func check(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	return checkWith(args, stdout, stderr, startRunner)
}

func checkWith(args []string, stdout, stderr io.Writer, start runner) int {
	fs := flag.NewFlagSet("check", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, checkUsage) }
	var f runFlags
	f.define(fs)
	asJSON := fs.Bool("json", false, "")
	asJUnit := fs.Bool("junit", false, "")
	if status, ok := parseFlags(fs, args, stdout, checkUsage); !ok {
		return status
	}
	if *asJSON && *asJUnit {
		fmt.Fprintln(stderr, "levelsum: check: -json or -junit, not both")
		return 2
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	status := 0
	var all []checked
	for i, file := range fs.Args() {
		c, err := checkOne(ctx, file, f, start, stderr)
		if err != nil {
			fmt.Fprintf(stderr, "levelsum: check: %v\n", err)
			status = max(status, statusOf(err))
			c = checked{File: file, Failures: []string{err.Error()}}
		}
		if !c.OK {
			status = max(status, 1)
		}
		all = append(all, c)
		if ctx.Err() != nil {
			for _, left := range fs.Args()[i+1:] {
				fmt.Fprintf(stderr, "levelsum: check: not checked: %s\n", left)
				all = append(all, checked{File: left, Failures: []string{"not checked: the command was interrupted"}})
			}
			break
		}
	}
	var err error
	switch {
	case *asJSON:
		e := json.NewEncoder(stdout)
		e.SetEscapeHTML(false)
		e.SetIndent("", " ")
		err = e.Encode(map[string]any{"notebooks": all})
	case *asJUnit:
		err = writeJUnit(stdout, all)
	default:
		var b bytes.Buffer
		for _, c := range all {
			c.print(&b)
		}
		_, err = stdout.Write(b.Bytes())
	}
	if err != nil {
		fmt.Fprintf(stderr, "levelsum: check: %v\n", err)
		return 1
	}
	return status
}

func checkOne(ctx context.Context, file string, f runFlags, start runner, stderr io.Writer) (checked, error) {
	stored, err := readNotebook(file)
	if err != nil {
		return checked{}, err
	}
	now, r, err := execute(ctx, file, f, start, stderr)
	if err != nil {
		return checked{}, err
	}
	findings, err := rerun.Compare(stored, now)
	if err != nil {
		return checked{}, fmt.Errorf("%s: %w", file, err)
	}
	c := checked{File: file, OK: r.OK(), Cells: len(r.Steps), NotRun: r.NotRun, Findings: findings}
	for _, s := range r.Steps {
		c.took += s.Took
		if s.Fault != nil && !s.Allowed {
			c.Failures = append(c.Failures, fmt.Sprintf("cell %d: %s: %s", s.Cell, s.Fault.Name, s.Fault.Message))
		}
	}
	for _, x := range findings {
		c.OK = c.OK && !x.Verdict.Differs()
	}
	return c, nil
}

// print writes the short table: every named result, and of the rest what is
// not identical.
func (c checked) print(w io.Writer) {
	count := map[rerun.Verdict]int{}
	for _, f := range c.Findings {
		count[f.Verdict]++
	}
	var sum []string
	for v := rerun.Identical; v <= rerun.Missing; v++ {
		if count[v] > 0 {
			sum = append(sum, fmt.Sprintf("%d %v", count[v], v))
		}
	}
	if len(c.Failures) > 0 {
		sum = append(sum, fmt.Sprintf("%d failed", len(c.Failures)))
	}
	if c.NotRun > 0 {
		sum = append(sum, fmt.Sprintf("%d cells not run", c.NotRun))
	}
	if len(sum) == 0 {
		sum = []string{"nothing to compare"}
	}
	fmt.Fprintf(w, "%s: %s\n", c.File, strings.Join(sum, ", "))
	for _, s := range c.Failures {
		fmt.Fprintf(w, "  failed: %s\n", s)
	}
	t := tabwriter.NewWriter(w, 0, 8, 2, ' ', 0)
	for _, f := range c.Findings {
		if f.Kind != "result" && f.Verdict == rerun.Identical {
			continue
		}
		fmt.Fprintf(t, "  %v\t%s\t%s\n", f.Verdict, where(f), change(f))
	}
	t.Flush()
}

// where names what a finding is about.
func where(f rerun.Finding) string {
	switch {
	case f.Kind == "result":
		return f.Name
	case f.Kind == "number":
		return fmt.Sprintf("%s, in the text of cell %d", f.Name, f.Cell)
	case f.Kind == "data":
		return "data " + f.Name
	case f.Kind == "seed":
		return "seed of " + f.Name
	case f.Kind == "provenance" && f.Name == "state" && f.Cell > 0:
		return fmt.Sprintf("cell %d", f.Cell)
	case f.Kind == "provenance" && f.Name == "state":
		return "stored state"
	case f.Kind == "provenance" && f.Cell == 0:
		return f.Name
	}
	return fmt.Sprintf("%s, cell %d, %s", f.Kind, f.Cell, f.Name)
}

// change says how the new value differs from the stored one.
func change(f rerun.Finding) string {
	var s []string
	switch {
	case f.Verdict == rerun.Identical:
		s = append(s, f.Now)
	case f.Old != "" && f.Now != "":
		s = append(s, f.Old+" -> "+f.Now)
	case f.Old != "":
		s = append(s, "was "+f.Old)
	case f.Now != "":
		s = append(s, f.Now)
	}
	if f.Verdict != rerun.Identical && f.Delta != 0 {
		d := fmt.Sprintf("Δ = %.3g", f.Delta)
		if f.DeltaU != 0 {
			d += fmt.Sprintf(" = %.2g u", f.DeltaU)
		}
		s = append(s, d)
	}
	if f.Note != "" {
		s = append(s, f.Note)
	}
	return strings.Join(s, "; ")
}

// The elements that readers of JUnit XML agree on (testsuites, testsuite,
// testcase, failure, error, system-out).
type junitCase struct {
	Class   string     `xml:"classname,attr"`
	Name    string     `xml:"name,attr"`
	Time    string     `xml:"time,attr"`
	Failure *junitText `xml:"failure,omitempty"`
	Error   *junitText `xml:"error,omitempty"`
	Note    string     `xml:"system-out,omitempty"`
}

type junitText struct {
	Message string `xml:"message,attr"`
	Type    string `xml:"type,attr"`
	Text    string `xml:",chardata"`
}

type junitCount struct {
	Tests    int    `xml:"tests,attr"`
	Failures int    `xml:"failures,attr"`
	Errors   int    `xml:"errors,attr"`
	Skipped  int    `xml:"skipped,attr"`
	Time     string `xml:"time,attr"`
}

type junitSuite struct {
	Name string `xml:"name,attr"`
	junitCount
	Cases []junitCase `xml:"testcase"`
}

func writeJUnit(w io.Writer, all []checked) error {
	root := struct {
		XMLName xml.Name `xml:"testsuites"`
		Name    string   `xml:"name,attr"`
		junitCount
		Suites []junitSuite `xml:"testsuite"`
	}{Name: "levelsum check"}
	const none = "0.000"
	var took time.Duration
	for _, c := range all {
		s := junitSuite{Name: c.File}
		s.Time = fmt.Sprintf("%.3f", c.took.Seconds())
		took += c.took
		names := map[string]int{}
		add := func(name string) *junitCase {
			// Readers take two cases of one name for one.
			if names[name]++; names[name] > 1 {
				name = fmt.Sprintf("%s (%d)", name, names[name])
			}
			s.Cases = append(s.Cases, junitCase{Class: c.File, Name: name, Time: none})
			return &s.Cases[len(s.Cases)-1]
		}
		cells := add("cells run")
		cells.Time = s.Time
		if len(c.Failures) > 0 || c.NotRun > 0 {
			text := strings.Join(c.Failures, "; ")
			if c.NotRun > 0 {
				text += fmt.Sprintf("; %d cells not run", c.NotRun)
			}
			text = strings.TrimPrefix(text, "; ")
			cells.Error = &junitText{text, "failed", text}
			s.Errors++
		}
		for _, f := range c.Findings {
			x := add(where(f))
			text := f.Verdict.String() + ": " + change(f)
			switch {
			case f.Verdict.Differs():
				x.Failure = &junitText{text, f.Verdict.String(), text}
				s.Failures++
			case f.Verdict != rerun.Identical:
				x.Note = text
			}
		}
		s.Tests = len(s.Cases)
		root.Tests += s.Tests
		root.Failures += s.Failures
		root.Errors += s.Errors
		root.Suites = append(root.Suites, s)
	}
	root.Time = fmt.Sprintf("%.3f", took.Seconds())
	if _, err := io.WriteString(w, xml.Header); err != nil {
		return err
	}
	e := xml.NewEncoder(w)
	e.Indent("", " ")
	if err := e.Encode(root); err != nil {
		return err
	}
	_, err := io.WriteString(w, "\n")
	return err
}
