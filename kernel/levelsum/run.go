package main

import (
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"maps"
	"math"
	"os"
	"os/signal"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"syscall"
	"time"

	"levelsum/kernel/engine"
	"levelsum/kernel/notebook"
	"levelsum/kernel/rerun"
	child "levelsum/kernel/runner"
)

const runUsage = `usage: levelsum run [flags] NOTEBOOK...

Runs the code cells of each notebook in order in a fresh engine, stores what
they show in the notebook, and prints the named results. Relative paths in
cells mean the notebook's folder.

  -o OUT
        Write to the file OUT, or into the folder OUT, instead of in place.
  -set NAME=VALUE
        Give an input another value, a Go expression; may be repeated, needs
        -o. Inputs are the variables of cells with the line //levelsum:input.
  -keep-going
        Go on after a cell that failed.
  -limit DURATION
        End the run of a notebook that takes longer (90s, 10m, 2h).
  -memory SIZE
        End a cell whose engine takes more (512MB, 4GB).
  -native
        Have the Go toolchain compile every cell and interpret none: all cells
        as one program, which is then run cell by cell. What a cell is made of
        may turn out otherwise when an earlier one fails (-keep-going); it is
        then compiled by itself, and that is said.

The exit status is 0 on success, 1 if a cell failed, 2 on misuse.
`

// runner starts the session in which the cells of a notebook run.
type runner func(ctx context.Context, o engine.Options) (rerun.Session, error)

func startRunner(ctx context.Context, o engine.Options) (rerun.Session, error) {
	return engine.Start(ctx, o)
}

// runFlags are the flags that run and check share.
type runFlags struct {
	set       []rerun.Setting
	keepGoing bool
	native    bool
	limit     time.Duration
	memory    int64
}

func (f *runFlags) define(fs *flag.FlagSet) {
	fs.BoolVar(&f.keepGoing, "keep-going", false, "")
	fs.BoolVar(&f.native, "native", false, "")
	fs.DurationVar(&f.limit, "limit", 0, "")
	fs.Func("memory", "", func(s string) (err error) { f.memory, err = parseSize(s); return err })
}

// words are the options that were given, as the command line spells them.
func (f *runFlags) words() []string {
	var out []string
	if f.native {
		out = append(out, "-native")
	}
	if f.keepGoing {
		out = append(out, "-keep-going")
	}
	if f.limit > 0 {
		out = append(out, "-limit "+f.limit.String())
	}
	if f.memory > 0 {
		out = append(out, fmt.Sprintf("-memory %gMB", float64(f.memory)/1e6))
	}
	for _, s := range f.set {
		out = append(out, "-set "+s.Name+"="+s.Value)
	}
	return out
}

// parseSize reads a number of bytes with a unit: 512MB, 4GB, 1.5GiB.
func parseSize(s string) (int64, error) {
	for _, u := range []struct {
		name  string
		bytes float64
	}{{"GiB", 1 << 30}, {"MiB", 1 << 20}, {"GB", 1e9}, {"MB", 1e6}} {
		if n, ok := strings.CutSuffix(s, u.name); ok {
			x, err := strconv.ParseFloat(strings.TrimSpace(n), 64)
			if err != nil || !(x > 0) || x*u.bytes > math.MaxInt64/2 {
				break
			}
			return int64(x * u.bytes), nil
		}
	}
	return 0, errors.New("want a size with its unit: 512MB, 4GB")
}

// run is "levelsum run".
func run(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	return runWith(args, stdout, stderr, startRunner)
}

func runWith(args []string, stdout, stderr io.Writer, start runner) int {
	fs := flag.NewFlagSet("run", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, runUsage) }
	var f runFlags
	f.define(fs)
	out := fs.String("o", "", "")
	fs.Func("set", "", func(s string) error {
		p, err := rerun.ParseSetting(s)
		f.set = append(f.set, p)
		return err
	})
	if status, ok := parseFlags(fs, args, stdout, runUsage); !ok {
		return status
	}
	misuse := func(format string, a ...any) int {
		fmt.Fprintf(stderr, "levelsum: run: "+format+"\n", a...)
		return 2
	}
	files := fs.Args()
	intoFolder := false
	if info, err := os.Stat(*out); *out != "" && err == nil && info.IsDir() {
		intoFolder = true
	}
	switch {
	case len(files) > 1 && *out != "" && !intoFolder:
		return misuse("several notebooks need a folder after -o; %s is none", *out)
	case len(f.set) > 0 && *out == "":
		return misuse("-set changes the notebook's inputs, so it needs -o OUT; nothing was run")
	}
	targets := map[string]string{}
	for _, file := range files {
		targets[file] = file
		switch {
		case intoFolder:
			targets[file] = filepath.Join(*out, filepath.Base(file))
		case *out != "":
			targets[file] = *out
		}
	}
	from := map[string]string{}
	for _, file := range slices.Sorted(maps.Keys(targets)) {
		if other, ok := from[targets[file]]; ok {
			return misuse("%s and %s would both be written to %s; nothing was run", other, file, targets[file])
		}
		from[targets[file]] = file
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	status := 0
	for i, file := range files {
		status = max(status, runOne(ctx, file, targets[file], f, start, stdout, stderr))
		if ctx.Err() != nil {
			if i+1 < len(files) {
				fmt.Fprintf(stderr, "levelsum: run: not run: %s\n", strings.Join(files[i+1:], ", "))
			}
			break
		}
	}
	return status
}

// parseFlags parses args; ok is false if the command is over with the status.
func parseFlags(fs *flag.FlagSet, args []string, stdout io.Writer, usage string) (status int, ok bool) {
	if len(args) == 1 && (args[0] == "-h" || args[0] == "-help" || args[0] == "--help") {
		fmt.Fprint(stdout, usage)
		return 0, false
	}
	// Flags may stand after the notebooks too: levelsum run x.ipynb -o y.ipynb.
	var files []string
	for {
		if err := fs.Parse(args); err != nil {
			return 2, false
		}
		args = fs.Args()
		if len(args) == 0 {
			break
		}
		files, args = append(files, args[0]), args[1:]
	}
	if len(files) == 0 {
		fs.Usage()
		return 2, false
	}
	if err := fs.Parse(append([]string{"--"}, files...)); err != nil {
		return 2, false
	}
	return 0, true
}

// execute reads a notebook and runs it, telling stderr how each cell went.
func execute(ctx context.Context, file string, f runFlags, start runner, stderr io.Writer) (*notebook.Document, *rerun.Report, error) {
	d, err := readNotebook(file)
	if err != nil {
		return nil, nil, err
	}
	if err := rerun.CheckLanguage(d); err != nil {
		return nil, nil, fmt.Errorf("%s: %w", file, err)
	}
	dir := filepath.Dir(file)
	var env []string
	if words := f.words(); len(words) > 0 {
		b, err := json.Marshal(words)
		if err != nil {
			return nil, nil, err
		}
		env = []string{child.OptionsEnv + "=" + string(b)}
	}
	stderr, progress := withProgress(stderr)
	fmt.Fprintln(stderr, file)
	for _, m := range d.Mended {
		fmt.Fprintf(stderr, "  %s\n", m)
	}
	r, err := rerun.Run(ctx, d, rerun.Options{
		Start: func(ctx context.Context) (rerun.Session, error) {
			return start(ctx, engine.Options{Dir: dir, MemoryLimit: f.memory, Compiled: f.native, Env: env})
		},
		Words:     f.words(),
		Dir:       dir,
		KeepGoing: f.keepGoing,
		Limit:     f.limit,
		Set:       f.set,
		Whole:     f.native,
		Compiled:  func(p engine.Program) { printProgram(stderr, p) },
		Step:      func(s rerun.Step) { printStep(stderr, s) },
		Progress:  progress,
		Hint:      func(text string) { fmt.Fprintf(stderr, "  %s\n", strings.TrimRight(text, "\n")) },
	})
	if err != nil {
		return nil, nil, fmt.Errorf("%s: %w", file, err)
	}
	if len(r.Steps) == 0 && r.NotRun == 0 {
		fmt.Fprintln(stderr, "  no cell of code in it, so nothing was run")
	}
	if r.Stopped != "" {
		fmt.Fprintf(stderr, "  stopped: %s\n", r.Stopped)
	}
	if r.NotRun > 0 {
		fmt.Fprintf(stderr, "  %d not run\n", r.NotRun)
	}
	return d, r, nil
}

// printProgram says what the compiler made of the cells.
func printProgram(w io.Writer, p engine.Program) {
	switch {
	case p.Alone != "":
		fmt.Fprintf(w, "  each cell is compiled by itself: %s\n", p.Alone)
	case p.Cells > 0:
		how := fmt.Sprintf("linked once in %.2f s", p.Took.Seconds())
		if !p.Linked {
			how = "as it was built before"
		}
		fmt.Fprintf(w, "  one program of %s, %s\n", count(p.Cells, "cell"), how)
	}
}

func count(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

func printStep(w io.Writer, s rerun.Step) {
	word := "ok"
	switch {
	case s.Fault != nil && s.Allowed:
		word = "ok (its fault is wanted)"
	case s.Fault != nil:
		word = "failed"
	}
	fmt.Fprintf(w, "  [%d] %-6s %6.2f s  %s\n", s.Count, word, s.Took.Seconds(), s.First)
	if s.Alone != "" {
		fmt.Fprintf(w, "      compiled by itself: %s\n", s.Alone)
	}
	if s.Fault == nil || s.Allowed {
		return
	}
	head := s.Fault.Name + ": " + s.Fault.Message
	if len(s.Fault.Trace) == 0 || !strings.HasSuffix(s.Fault.Trace[0], head) {
		fmt.Fprintf(w, "      %s\n", head) // else the trace begins with it, and with the place
	}
	for _, l := range s.Fault.Trace {
		if l != s.Fault.Message {
			fmt.Fprintf(w, "      %s\n", l)
		}
	}
}

func runOne(ctx context.Context, file, path string, f runFlags, start runner, stdout, stderr io.Writer) int {
	fail := func(err error) int {
		fmt.Fprintf(stderr, "levelsum: run: %v\n", err)
		return statusOf(err)
	}
	if _, err := readNotebook(file); err != nil {
		return fail(err)
	}
	to, err := openTarget(path, path == file)
	if err != nil {
		return fail(err)
	}
	d, r, err := execute(ctx, file, f, start, stderr)
	if err != nil {
		return fail(err)
	}
	if ctx.Err() != nil {
		fmt.Fprintf(stderr, "levelsum: run: %s: interrupted, nothing was written\n", file)
		return 1
	}
	if p, err := rerun.ReadProvenance(d); err == nil && p != nil && len(p.Data) > 0 && filepath.Dir(file) != filepath.Dir(path) {
		fmt.Fprintf(stderr, "  note: %s lies in another folder than %s; names of data files in it start from the latter\n", path, file)
	}
	failed := 0
	if err := to.save(d); err != nil {
		failed = fail(err)
	}
	for _, x := range r.Inputs {
		if x.Set != "" {
			fmt.Fprintf(stdout, "%s = %s (set; the notebook has %s)\n", x.Name, x.Set, x.Own)
		} else {
			fmt.Fprintf(stdout, "%s = %s (the notebook's own value)\n", x.Name, x.Own)
		}
	}
	for _, x := range r.Results {
		fmt.Fprintln(stdout, x.Shown)
	}
	if !r.OK() {
		return max(1, failed)
	}
	return failed
}

// statusOf returns 2 for what the user can put right in the call or the
// notebook file, 1 for everything else.
func statusOf(err error) int {
	var format *notebook.FormatError
	var misuse *misuseError
	if errors.As(err, &format) || errors.As(err, &misuse) || errors.Is(err, rerun.ErrLanguage) || errors.Is(err, notebook.ErrSyntax) || errors.Is(err, os.ErrNotExist) || errors.Is(err, rerun.ErrInput) {
		return 2
	}
	return 1
}
