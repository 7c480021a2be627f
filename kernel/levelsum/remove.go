package main

import (
	"errors"
	"flag"
	"fmt"
	"io"
	"io/fs"
	"log"
	"os"
	"path/filepath"

	"levelsum/kernel/compile"
)

const removeUsage = `usage: levelsum remove [-prefix DIR]

Takes away what install has made: the kernel's registration, the compiled
packages and the cells compiled so far. Notebooks and this program stay.

  -prefix DIR
        Take the registration from below DIR/share/jupyter.

The exit status is 0 on success, 1 if something could not be removed, 2 on
misuse.
`

// remove is "levelsum remove".
func remove(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	say := log.New(stderr, "levelsum: ", 0)
	flags := flag.NewFlagSet("remove", flag.ContinueOnError)
	flags.SetOutput(stderr)
	flags.Usage = func() { fmt.Fprint(stderr, removeUsage) }
	prefix := flags.String("prefix", "", "")
	if err := flags.Parse(args); err != nil || flags.NArg() > 0 {
		if err == nil {
			flags.Usage()
		}
		return misuse(err)
	}
	status, none := 0, true
	dir, err := specFolder(*prefix)
	if err == nil {
		var removed bool
		if removed, err = unregister(dir); removed {
			fmt.Fprintf(stdout, "removed the kernel's registration: %s\n", dir)
			none = false
		}
	}
	if err != nil {
		say.Printf("remove: %v", err)
		status = 1
	}
	root, err := compile.Root()
	if err != nil {
		say.Printf("remove: %v", err)
		return 1
	}
	for _, part := range []struct{ dir, what string }{
		{"kit", "the packages compiled for cells"},
		{"built", "the cells compiled so far"},
	} {
		dir := filepath.Join(root, part.dir)
		if _, err := os.Stat(dir); errors.Is(err, fs.ErrNotExist) {
			continue
		}
		size := folderSize(dir)
		if err := os.RemoveAll(dir); err != nil {
			say.Printf("remove: %v", err)
			status = 1
			continue
		}
		fmt.Fprintf(stdout, "removed %s: %s (%.0f MB)\n", part.what, dir, float64(size)/1e6)
		none = false
	}
	os.Remove(root) // stays if it holds something else
	if none && status == 0 {
		fmt.Fprintln(stdout, "there is nothing to remove")
	}
	return status
}

// folderSize adds up the sizes of a folder's files.
func folderSize(dir string) (n int64) {
	filepath.WalkDir(dir, func(_ string, d fs.DirEntry, err error) error {
		if err == nil && d.Type().IsRegular() {
			if info, err := d.Info(); err == nil {
				n += info.Size()
			}
		}
		return nil
	})
	return n
}
