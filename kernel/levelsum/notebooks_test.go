package main

import (
	"os"
	"path/filepath"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"

	"levelsum/kernel/compile"
	"levelsum/kernel/compile/kittest"
)

// TestNotebooks runs the scripts of testdata/notebooks with a real levelsum
// ($LEVELSUM) whose cells run on the engine, interpreted and compiled. Each
// script starts in a folder with copies of notebooks and testdata.
func TestNotebooks(t *testing.T) {
	host, err := kittest.Make(t.Context(), t.TempDir(), "./kernel/levelsum", compile.Race)
	if err != nil {
		t.Fatal(err)
	}
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir: "testdata/notebooks",
		Setup: func(e *testscript.Env) error {
			e.Setenv("LEVELSUM", host.Exe)
			e.Setenv("LEVELSUM_CACHE", host.Cache)
			for _, d := range []string{"notebooks", "testdata"} {
				if err := os.CopyFS(filepath.Join(e.WorkDir, d), os.DirFS(filepath.Join(root, d))); err != nil {
					return err
				}
			}
			return nil
		},
	})
}
