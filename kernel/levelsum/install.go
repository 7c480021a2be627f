package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"log"
	"os"
	"os/signal"
	"path/filepath"
	"strings"
	"time"

	"levelsum/kernel/compile"
)

const installUsage = `usage: levelsum install [-prefix DIR] [-source DIR]

Registers the kernel with Jupyter's front ends for this user (or for the active
virtual environment), and compiles what cells may import, so that cells can be
compiled. Done a second time, it changes nothing.

  -prefix DIR
        Register below DIR/share/jupyter instead.
  -source DIR
        The folder of levelsum's source, if it is not found.

The exit status is 0 on success, also where cells can only be interpreted, 1 if
something failed, 2 on misuse.
`

// install is "levelsum install".
func install(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	say := log.New(stderr, "levelsum: ", 0)
	fs := flag.NewFlagSet("install", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, installUsage) }
	prefix := fs.String("prefix", "", "")
	source := fs.String("source", "", "")
	if err := fs.Parse(args); err != nil || fs.NArg() > 0 {
		if err == nil {
			fs.Usage()
		}
		return misuse(err)
	}
	exe, err := os.Executable()
	if err != nil {
		say.Printf("install: %v", err)
		return 1
	}
	if strings.Contains(filepath.ToSlash(exe), "/go-build") {
		say.Print("install: this levelsum was started by go run and is gone when it ends; build it first: go build -trimpath ./kernel/levelsum")
		return 2
	}
	dir, err := specFolder(*prefix)
	if err != nil {
		say.Printf("install: %v", err)
		return 1
	}
	changed, err := register(dir, exe)
	switch {
	case err != nil:
		say.Printf("install: the kernel cannot be registered: %v", err)
		return 1
	case changed:
		fmt.Fprintf(stdout, "registered the kernel in %s\n", dir)
	default:
		fmt.Fprintf(stdout, "the kernel is registered in %s already\n", dir)
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	err = prepare(ctx, exe, *source, stdout, stderr)
	var u *compile.Unavailable
	switch {
	case errors.As(err, &u):
		say.Printf("install: cells cannot be compiled, those that need it will be refused: %v", err)
		return 0
	case err != nil:
		say.Printf("install: compiling what cells may import: %v", err)
		return 1
	}
	return 0
}

// misuse is the exit status after a flag set's error.
func misuse(err error) int {
	if errors.Is(err, flag.ErrHelp) {
		return 0
	}
	return 2
}

// prepare makes the kit of this executable, if it is not there, and tries it.
func prepare(ctx context.Context, exe, source string, stdout, stderr io.Writer) error {
	if k, err := compile.Here(); err == nil && try(ctx, k) == nil {
		fmt.Fprintf(stdout, "what cells may import is compiled already: %d packages in %s\n", len(k.Paths()), k.Dir)
		return nil
	}
	if err := compile.CanOpen(); err != nil {
		return err
	}
	dir, err := compile.KitDir(exe)
	if err != nil {
		return err
	}
	if source, err = findSource(exe, source); err != nil {
		return err
	}
	start := time.Now()
	k, err := compile.Prepare(ctx, dir, source, compile.Options{Race: compile.Race, Executable: exe, Docs: true, Log: stderr})
	if err != nil {
		return err
	}
	if err := errors.Join(k.Fits(), try(ctx, k)); err != nil {
		return err
	}
	fmt.Fprintf(stdout, "compiled what cells may import: %d packages in %s, %.0f s\n", len(k.Paths()), dir, time.Since(start).Seconds())
	retired, err := compile.Retire()
	for _, r := range retired {
		fmt.Fprintf(stdout, "removed what an earlier build used: %s\n", r)
	}
	return err
}

// findSource returns the folder of this module's source: the one given, or one
// from which a kit was made for this executable before, or one around the
// working folder or the executable.
func findSource(exe, given string) (string, error) {
	if given != "" {
		if !isSource(given) {
			return "", fmt.Errorf("%s is not the folder of levelsum's source", given)
		}
		return filepath.Abs(given)
	}
	if dir := compile.SourceOf(exe); dir != "" && isSource(dir) {
		return dir, nil
	}
	wd, err := os.Getwd()
	if err != nil {
		wd = filepath.Dir(exe)
	}
	for _, dir := range []string{wd, filepath.Dir(exe)} {
		for {
			if isSource(dir) {
				return dir, nil
			}
			up := filepath.Dir(dir)
			if up == dir {
				break
			}
			dir = up
		}
	}
	return "", errors.New("levelsum's source is not found; name its folder with -source")
}

// isSource says whether a folder holds this module.
func isSource(dir string) bool {
	data, err := os.ReadFile(filepath.Join(dir, "go.mod"))
	return err == nil && strings.HasPrefix(string(data), "module levelsum\n")
}
