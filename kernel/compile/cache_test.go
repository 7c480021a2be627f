package compile

import (
	"fmt"
	"os"
	"path/filepath"
	"testing"
	"time"
)

// fill puts a file of n bytes into the cache, used age ago.
func fill(t *testing.T, c *Cache, i, n int, age time.Duration) string {
	t.Helper()
	dir, err := c.scratch()
	if err != nil {
		t.Fatal(err)
	}
	defer os.RemoveAll(dir)
	tmp := filepath.Join(dir, "x")
	if err := os.WriteFile(tmp, make([]byte, n), 0o666); err != nil {
		t.Fatal(err)
	}
	used := time.Now().Add(-age)
	if err := os.Chtimes(tmp, used, used); err != nil {
		t.Fatal(err)
	}
	file, err := c.put(tmp, fmt.Sprintf("%064d", i), ".so")
	if err != nil {
		t.Fatal(err)
	}
	return file
}

func TestCacheEvictsUnusedForLongest(t *testing.T) {
	c := &Cache{Dir: t.TempDir(), Limit: 1000}
	var files []string
	for i := range 10 {
		files = append(files, fill(t, c, i, 100, time.Duration(20-i)*time.Hour))
	}
	for i, f := range files {
		if !exists(f) {
			t.Errorf("file %d was evicted at the limit", i)
		}
	}
	c.get(fmt.Sprintf("%064d", 0), ".so") // used: now the newest
	last := fill(t, c, 10, 100, time.Hour)
	// 1100 bytes: down to 800, that is without the three unused for longest.
	for i, f := range append(files, last) {
		if want := i < 1 || i > 3; exists(f) != want {
			t.Errorf("file %d is there: %t, want %t", i, !want, want)
		}
	}
}

func TestCacheKeepsWhatIsInUse(t *testing.T) {
	c := &Cache{Dir: t.TempDir(), Limit: 1000}
	for i := range 5 {
		f := fill(t, c, i, 400, time.Minute)
		if !exists(f) {
			t.Errorf("file %d, a minute old, was evicted", i)
		}
	}
}

// Another process's files count too, and what a dead one left is taken away.
func TestCacheCountsAllProcesses(t *testing.T) {
	dir := t.TempDir()
	one := &Cache{Dir: dir, Limit: 1000}
	old := fill(t, one, 1, 900, 3*time.Hour)
	dead := filepath.Join(dir, "tmp", "build-dead")
	if err := os.Mkdir(dead, 0o777); err != nil {
		t.Fatal(err)
	}
	then := time.Now().Add(-48 * time.Hour)
	if err := os.Chtimes(dead, then, then); err != nil {
		t.Fatal(err)
	}
	two := &Cache{Dir: dir, Limit: 1000}
	fill(t, two, 2, 200, 2*time.Hour)
	if exists(old) {
		t.Error("the other process's old file is still there")
	}
	if exists(dead) {
		t.Error("the dead build's folder is still there")
	}
}
