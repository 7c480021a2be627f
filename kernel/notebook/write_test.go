package notebook

import (
	"bufio"
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

func large(t *testing.T, fill string) *Document {
	t.Helper()
	d, err := Read("testdata/v4.5.ipynb")
	if err != nil {
		t.Fatal(err)
	}
	d.Cells()[0].SetSource(strings.Repeat(fill+"\n", 50000))
	return d
}

func TestWrite(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "real.ipynb")
	link := filepath.Join(dir, "link.ipynb")
	d := large(t, "a")
	if err := d.Write(path); err != nil {
		t.Fatal(err)
	}
	if err := os.Chmod(path, 0o640); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(path, link); err != nil {
		t.Fatal(err)
	}
	before, _ := os.Stat(path)
	if err := d.Write(link); err != nil {
		t.Fatal(err)
	}
	if after, _ := os.Stat(path); !os.SameFile(before, after) {
		t.Error("the same bytes were written again")
	}
	d.Cells()[0].SetSource("b")
	if err := d.Write(link); err != nil {
		t.Fatal(err)
	}
	if fi, err := os.Lstat(link); err != nil || fi.Mode()&os.ModeSymlink == 0 {
		t.Errorf("the link is gone: %v", err)
	}
	if fi, err := os.Stat(path); err != nil || fi.Mode().Perm() != 0o640 {
		t.Errorf("mode %v, %v; want 0640 as before", fi.Mode(), err)
	}
	if got, err := os.ReadFile(path); err != nil || !bytes.Equal(got, d.Bytes()) {
		t.Errorf("the file does not hold the document: %v", err)
	}
	if left, _ := filepath.Glob(filepath.Join(dir, ".*")); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
	if err := d.Write(filepath.Join(dir, "missing", "x.ipynb")); err == nil {
		t.Error("written into a folder that is not there")
	}
}

// TestWriteKilled ends a process that writes a document over and over, and
// looks at what the file holds: always one of the two documents, whole.
func TestWriteKilled(t *testing.T) {
	if path := os.Getenv("LEVELSUM_TEST_WRITE"); path != "" {
		a, b := large(t, "a"), large(t, "b")
		for {
			for _, d := range []*Document{a, b} {
				if err := d.Write(path); err != nil {
					t.Fatal(err)
				}
				fmt.Println("written")
			}
		}
	}
	path := filepath.Join(t.TempDir(), "x.ipynb")
	a, b := large(t, "a").Bytes(), large(t, "b").Bytes()
	for round := range 8 {
		cmd := exec.Command(os.Args[0], "-test.run=^TestWriteKilled$")
		cmd.Env = append(os.Environ(), "LEVELSUM_TEST_WRITE="+path)
		out, err := cmd.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := cmd.Start(); err != nil {
			t.Fatal(err)
		}
		lines := bufio.NewScanner(out)
		for range round + 1 {
			lines.Scan()
		}
		if err := cmd.Process.Kill(); err != nil {
			t.Fatal(err)
		}
		if err := cmd.Wait(); err == nil {
			t.Fatal("the writing process ended by itself")
		}
		got, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got, a) && !bytes.Equal(got, b) {
			t.Fatalf("after round %d the file holds neither document (%d bytes)", round, len(got))
		}
	}
}
