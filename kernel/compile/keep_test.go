package compile

import (
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"testing"
	"time"
)

// Go trims its build cache; what a kit has kept stays.
func TestKeptArchiveOutlivesItsSource(t *testing.T) {
	dir := t.TempDir()
	from, to := filepath.Join(dir, "cache"), filepath.Join(dir, "kit", "pkg", "a.a")
	if err := os.WriteFile(from, []byte("archive"), 0o444); err != nil {
		t.Fatal(err)
	}
	if err := keep(from, to); err != nil {
		t.Fatal(err)
	}
	if err := os.Remove(from); err != nil {
		t.Fatal(err)
	}
	if data, err := os.ReadFile(to); err != nil || string(data) != "archive" {
		t.Errorf("kept %q, %v", data, err)
	}
}

func TestRetireRemovesKitsOfEarlierBuilds(t *testing.T) {
	root := t.TempDir()
	t.Setenv("LEVELSUM_CACHE", root)
	exe, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	mine, err := KitDir(exe)
	if err != nil {
		t.Fatal(err)
	}
	kit := func(name, executable string) string {
		dir := filepath.Join(root, "kit", name)
		if err := os.MkdirAll(dir, 0o777); err != nil {
			t.Fatal(err)
		}
		data, err := json.Marshal(Manifest{Format: format, Source: "/src/" + name, Executable: executable})
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(dir, manifestName), data, 0o666); err != nil {
			t.Fatal(err)
		}
		return dir
	}
	kit(filepath.Base(mine), exe)
	earlier := kit("earlier", exe)
	gone := kit("gone", filepath.Join(root, "no-such"))
	kit("nobody's", "")
	used := kit("used", exe)
	hold(used)
	if got := SourceOf(filepath.Join(root, "no-such")); got != "/src/gone" {
		t.Errorf("the source of the program that is gone is %q", got)
	}
	unfinished := filepath.Join(root, "kit", "x.new-1")
	fresh := filepath.Join(root, "kit", "x.new-2")
	for _, d := range []string{unfinished, fresh} {
		if err := os.Mkdir(d, 0o777); err != nil {
			t.Fatal(err)
		}
	}
	old := time.Now().Add(-48 * time.Hour)
	if err := os.Chtimes(unfinished, old, old); err != nil {
		t.Fatal(err)
	}
	removed, err := Retire()
	if want := []string{earlier, gone, unfinished}; err != nil || !slices.Equal(removed, want) {
		t.Errorf("removed %v, %v; want %v", removed, err, want)
	}
	left, _ := filepath.Glob(filepath.Join(root, "kit", "*"))
	if len(left) != 4 || !exists(mine) || !exists(fresh) || !exists(used) {
		t.Errorf("left %v", left)
	}
}
