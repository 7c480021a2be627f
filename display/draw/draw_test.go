package draw

import (
	"bytes"
	"encoding/xml"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/display"
)

var (
	update = flag.Bool("update", false, "write the golden files")
	look   = flag.String("look", "", "folder to write PNG and PDF files of the gallery to")
)

func TestMain(m *testing.M) {
	flag.Parse()
	Register()
	if dir := os.Getenv(printEnv); dir != "" {
		s, err := hashes(dir)
		if err != nil {
			panic(err)
		}
		fmt.Println(s)
		return
	}
	os.Exit(m.Run())
}

// wellFormed fails unless s is well-formed XML without scripts or handlers.
func wellFormed(t *testing.T, s string) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader(s))
	for {
		tok, err := d.Token()
		if err == io.EOF {
			return
		}
		if err != nil {
			t.Fatalf("not well-formed: %v", err)
		}
		if e, ok := tok.(xml.StartElement); ok {
			if strings.EqualFold(e.Name.Local, "script") {
				t.Errorf("a script")
			}
			for _, a := range e.Attr {
				if strings.HasPrefix(strings.ToLower(a.Name.Local), "on") || strings.Contains(strings.ToLower(a.Value), "javascript:") {
					t.Errorf("attribute %s=%q", a.Name.Local, a.Value)
				}
				if a.Name.Local == "id" {
					t.Errorf("id %q: two figures on a page may share it", a.Value)
				}
			}
		}
	}
}

func TestGallery(t *testing.T) {
	for name, f := range gallery() {
		t.Run(name, func(t *testing.T) {
			if err := f.Check(); err != nil {
				t.Fatal(err)
			}
			v := f.View()
			file, _ := v.Data["image/svg+xml"].(string)
			page, _ := v.Data["text/html"].(string)
			wellFormed(t, file)
			wellFormed(t, page)
			golden := filepath.Join("testdata", name+".svg")
			if *update {
				if err := os.WriteFile(golden, []byte(file), 0o666); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if file != string(want) {
				t.Errorf("%s has changed; look at it and run with -update", golden)
			}
			if again := f.View().Data["image/svg+xml"]; again != file {
				t.Error("two runs differ")
			}
			if *look != "" {
				for _, ext := range []string{".png", ".pdf", ".csv", ".svg"} {
					if err := f.Save(filepath.Join(*look, name+ext)); err != nil {
						t.Error(err)
					}
				}
			}
		})
	}
}

func TestFilesAreStable(t *testing.T) {
	f := gallery()["points"]
	f.Width, f.Height = 40, 40
	for _, ext := range []string{".png", ".pdf"} {
		var b [2][]byte
		for i := range b {
			path := filepath.Join(t.TempDir(), "f"+ext)
			if err := f.Save(path); err != nil {
				t.Fatal(err)
			}
			var err error
			if b[i], err = os.ReadFile(path); err != nil {
				t.Fatal(err)
			}
		}
		if !bytes.Equal(b[0], b[1]) {
			t.Errorf("%s: two runs differ", ext)
		}
	}
	_ = display.OneColumn
}
