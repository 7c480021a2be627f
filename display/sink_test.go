package display

import (
	"os"
	"path/filepath"
	"testing"
)

func TestTerminalAsksLineByLine(t *testing.T) {
	name := filepath.Join(t.TempDir(), "in")
	if err := os.WriteFile(name, []byte("first\r\nsecond\n\nlast"), 0o600); err != nil {
		t.Fatal(err)
	}
	in, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer in.Close()
	defer func(old *os.File) { os.Stdin = old }(os.Stdin)
	os.Stdin = in
	for _, want := range []string{"first", "second", "", "last"} {
		if got, err := (terminal{}).Ask("", false); err != nil || got != want {
			t.Errorf("%q, %v, want %q", got, err, want)
		}
	}
	if got, err := (terminal{}).Ask("", false); err == nil {
		t.Errorf("%q at the end, want an error", got)
	}
}
