package notebook

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

func TestKeepsEveryByte(t *testing.T) {
	files, err := filepath.Glob("testdata/v4.*.ipynb")
	if err != nil || len(files) != 6 {
		t.Fatalf("%v, %v; want a document of each version from 4.0 to 4.5", files, err)
	}
	for _, f := range files {
		data, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		d, err := Read(f)
		if err != nil {
			t.Fatal(err)
		}
		if got := d.Bytes(); !bytes.Equal(got, data) {
			t.Errorf("%s: read and written again it differs:\n%s", f, got)
		}
		for _, c := range d.Cells() {
			if c.Kind() == Code {
				if err := c.SetOutputs(c.Outputs()); err != nil {
					t.Error(err)
				}
			}
		}
		if got := d.Bytes(); !bytes.Equal(got, data) {
			t.Errorf("%s: with its outputs put back it differs:\n%s", f, got)
		}
	}
}

// Key order, spelling of numbers and of strings, half a surrogate pair and a
// byte order mark: a file that no tool of the format wrote.
func TestKeepsForeignSpelling(t *testing.T) {
	const in = "\xef\xbb\xbf" + `{"nbformat_minor": 4, "nbformat": 4, "zeta": [1E5, 0.10, -0e0, 1e400],
		"metadata": {"b": "\u00e5\/\ud800", "a": {"unknown": []}},
		"cells": [{"source": "x", "metadata": {}, "cell_type": "markdown", "id": "kept before 4.5"}]}`
	const want = `{
 "nbformat_minor": 4,
 "nbformat": 4,
 "zeta": [
  1E5,
  0.10,
  -0e0,
  1e400
 ],
 "metadata": {
  "b": "\u00e5\/\ud800",
  "a": {
   "unknown": []
  }
 },
 "cells": [
  {
   "source": "x",
   "metadata": {},
   "cell_type": "markdown",
   "id": "kept before 4.5"
  }
 ]
}
`
	d, err := Parse("x", []byte(in))
	if err != nil {
		t.Fatal(err)
	}
	if got := string(d.Bytes()); got != want {
		t.Errorf("got\n%s", got)
	}
	if got := d.Metadata("b"); got != "å/\ufffd" {
		t.Errorf("Metadata(b) = %q", got)
	}
}

func TestRefused(t *testing.T) {
	cell := func(s string) string {
		return `{"nbformat":4,"nbformat_minor":4,"metadata":{},"cells":[{"cell_type":"markdown","metadata":{},"source":""},` + s + `]}`
	}
	for _, test := range []struct{ in, want string }{
		{"", "x.ipynb:1:1: not a notebook: the file ends in the middle of the document"},
		{"{\n \"a\": 1,\n}", "x.ipynb:3:1: not a notebook: a key in double quotes is wanted here"},
		{"{\n \"a\": 1\n<<<<<<< HEAD\n}", "x.ipynb:3:1: not a notebook: a mark of an unfinished merge (<<<<<<<)"},
		{`{"a":1,"a":2}`, `x.ipynb:1:8: not a notebook: key "a" occurs twice in one object`},
		{"{\"a\":\"\xff\"}", "x.ipynb:1:7: not a notebook: not UTF-8 text"},
		{strings.Repeat("[", 5000), "x.ipynb:1:1002: not a notebook: nested deeper than 1000 levels"},
		{`[]`, "x.ipynb: not a notebook: the file holds a list, want an object"},
		{`{"Name":"run 7"}`, "x.ipynb: not a notebook: neither nbformat nor cells in it"},
		{`{"nbformat":3,"nbformat_minor":0,"metadata":{},"worksheets":[]}`, "x.ipynb: nbformat: version 3; versions from 4.0 are read: open it in a current Jupyter front end and save it"},
		{`{"nbformat":2,"worksheets":[]}`, "x.ipynb: nbformat: version 2; versions from 4.0 are read: open it in a current Jupyter front end and save it"},
		{`{"nbformat":-4,"nbformat_minor":0,"cells":[]}`, "x.ipynb: nbformat: -4, want 4"},
		{`{"nbformat":5,"nbformat_minor":0,"metadata":{},"cells":[]}`, "x.ipynb: nbformat: version 5.0 is newer than this program, which reads 4"},
		{`{"nbformat":"4","nbformat_minor":0,"metadata":{},"cells":[]}`, "x.ipynb: nbformat, nbformat_minor: want two whole numbers, the version of the format"},
		{`{"nbformat":4,"nbformat_minor":0,"metadata":{},"cells":{}}`, "x.ipynb: cells: an object, want a list"},
		{cell(`{"cell_type":"code","metadata":{},"source":1,"outputs":[],"execution_count":null}`), "x.ipynb: cell 2 (code): source: a number, want a string or a list of strings"},
		{cell(`{"cell_type":"code","metadata":{},"source":"","execution_count":null}`), "x.ipynb: cell 2 (code): outputs: missing, want a list"},
		{cell(`{"cell_type":"code","metadata":{},"source":"","outputs":[{"output_type":"stream","name":"stdout"}],"execution_count":1}`), "x.ipynb: cell 2 (code): outputs[0].text: missing, want a string or a list of strings"},
		{cell(`{"cell_type":"code","metadata":{},"source":"","outputs":[{"output_type":"display_data","metadata":{},"data":{"text/plain":["a",2]}}],"execution_count":1}`), "x.ipynb: cell 2 (code): outputs[0].data[text/plain][1]: a number, want a string"},
		{cell(`{"cell_type":"heading","metadata":{},"source":""}`), `x.ipynb: cell 2 (heading): cell_type: "heading", want code, markdown or raw`},
		{cell(`7`), "x.ipynb: cell 2: a number, want an object"},
	} {
		_, err := Parse("x.ipynb", []byte(test.in))
		if err == nil || err.Error() != test.want {
			t.Errorf("%.80s\n got %v\nwant %s", test.in, err, test.want)
		}
	}
	_, err := Parse("x", []byte(cell(`7`)))
	var f *FormatError
	if !errors.As(err, &f) || f.Cell != 2 {
		t.Errorf("%v is no *FormatError of cell 2", err)
	}
}

func TestLaterMinorVersion(t *testing.T) {
	d, err := Parse("x", []byte(`{"nbformat":4,"nbformat_minor":9,"metadata":{},"cells":[{"id":"a","cell_type":"sketch","metadata":{},"strokes":[1]}]}`))
	if err != nil {
		t.Fatal(err)
	}
	if k := d.Cells()[0].Kind(); k != "sketch" {
		t.Errorf("kind %q", k)
	}
	if !strings.Contains(string(d.Bytes()), `"strokes"`) {
		t.Error("an unknown cell was not kept")
	}
}

func TestIDs(t *testing.T) {
	doc := func(minor int) []byte {
		return fmt.Appendf(nil, `{"nbformat":4,"nbformat_minor":%d,"metadata":{},"cells":[
		{"cell_type":"markdown","metadata":{},"source":"a"},
		{"id":"same","cell_type":"markdown","metadata":{},"source":"a"},
		{"id":"same","cell_type":"markdown","metadata":{},"source":"a"}]}`, minor)
	}
	d, err := Parse("x", doc(5))
	if err != nil {
		t.Fatal(err)
	}
	if err := obeys(t, published(t, 5), d.Bytes()); err != nil {
		t.Error(err)
	}
	c := d.Cells()
	if c[1].ID() != "same" || c[0].ID() == "" || c[2].ID() == "same" || c[2].ID() == c[0].ID() {
		t.Errorf("ids %q %q %q", c[0].ID(), c[1].ID(), c[2].ID())
	}
	if len(d.Mended) != 2 {
		t.Errorf("mended: %q", d.Mended)
	}
	again, err := Parse("x", doc(5))
	if err != nil || !bytes.Equal(again.Bytes(), d.Bytes()) {
		t.Errorf("the same document got other ids: %v", err)
	}
	if d, err = Parse("x", doc(4)); err != nil || d.Cells()[0].ID() != "" || len(d.Mended) != 0 {
		t.Errorf("version 4.4 has no ids: %v %q", err, d.Mended)
	}
}

func TestOutputs(t *testing.T) {
	d, err := Read("testdata/v4.5.ipynb")
	if err != nil {
		t.Fatal(err)
	}
	c := d.Cells()[1]
	png := []byte{0x89, 'P', 'N', 'G'}
	in := []Output{
		{Kind: Stream, Name: "stdout", Text: "a\nb"},
		{Kind: ExecuteResult, Count: 7, Data: map[string]any{
			"text/plain": "γ & <θ>\nend\n", "image/png": png,
			"application/vnd.levelsum.result+json": map[string]any{"value": 33.151, "u": 1e-7, "n": 3.0, "big": 1e18},
		}, Metadata: map[string]any{"isolated": true}},
		{Kind: ErrorOutput, ErrorName: "panic", ErrorValue: "v", Traceback: []string{"one", "two"}},
	}
	if err := c.SetOutputs(in); err != nil {
		t.Fatal(err)
	}
	c.SetExecutionCount(7)
	if err := obeys(t, published(t, 5), d.Bytes()); err != nil {
		t.Fatal(err)
	}
	s := string(d.Bytes())
	for _, want := range []string{"\"γ & <θ>\\n\",\n       \"end\\n\"", `"image/png": "iVBORw=="`, `"u": 1e-07`, `"n": 3,`, `"big": 1000000000000000000`} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s in\n%s", want, s)
		}
	}
	back, err := Parse("x", d.Bytes())
	if err != nil {
		t.Fatal(err)
	}
	got := back.Cells()[1].Outputs()
	if len(got) != 3 || got[0].Text != in[0].Text || got[1].Count != 7 || got[1].Data["text/plain"] != in[1].Data["text/plain"] ||
		!reflect.DeepEqual(got[2].Traceback, in[2].Traceback) || got[1].Metadata["isolated"] != true {
		t.Errorf("read back: %+v", got)
	}
	r := got[1].Data["application/vnd.levelsum.result+json"].(map[string]any)
	if r["value"] != json.Number("33.151") {
		t.Errorf("value read back as %#v", r["value"])
	}
	if n := back.Cells()[1].ExecutionCount(); n != 7 {
		t.Errorf("execution count %d", n)
	}
	if err := c.SetOutputs([]Output{{Kind: DisplayData, Data: map[string]any{"application/json": func() {}}}}); err == nil {
		t.Error("an output that JSON cannot hold was taken")
	}
}

func TestEditing(t *testing.T) {
	d, err := Read("testdata/v4.5.ipynb")
	if err != nil {
		t.Fatal(err)
	}
	c := d.Cells()[1]
	c.SetSource("x := 1\nx")
	if got := c.Source(); got != "x := 1\nx" {
		t.Errorf("source %q", got)
	}
	if err := c.SetMetadata(map[string]any{"b": 1, "a": "<&>"}, "levelsum", "run"); err != nil {
		t.Fatal(err)
	}
	if err := d.SetMetadata("x", "levelsum", "engine"); err != nil {
		t.Fatal(err)
	}
	if !d.Cells()[0].HasTag("two words") || d.Cells()[1].HasTag("two words") {
		t.Error("HasTag is wrong")
	}
	s := string(d.Bytes())
	for _, want := range []string{"\"keep\": null,\n     \"run\": {\n      \"a\": \"<&>\",\n      \"b\": 1\n", "  \"levelsum\": {\n   \"engine\": \"x\"\n  },\n  \"title\""} {
		if !strings.Contains(s, want) {
			t.Errorf("no %s in\n%s", want, s)
		}
	}
}

func FuzzParse(f *testing.F) {
	for minor := range 6 {
		data, err := os.ReadFile(fmt.Sprintf("testdata/v4.%d.ipynb", minor))
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Add([]byte(`{"nbformat":4,"nbformat_minor":5,"metadata":{},"cells":[{"cell_type":"raw","metadata":{},"source":"\ud83d\ude00\ud800"}]}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		if v, err := parse(data); err == nil {
			// encoding/json is the obvious code; it differs in keys that
			// occur twice and in bytes that are no UTF-8, which parse refuses.
			var want any
			e := json.NewDecoder(bytes.NewReader(data))
			e.UseNumber()
			if err := e.Decode(&want); err != nil {
				t.Fatalf("parse takes what encoding/json refuses: %v", err)
			}
			if got := v.toGo(); !reflect.DeepEqual(got, want) {
				t.Fatalf("parse %#v, encoding/json %#v", got, want)
			}
		}
		d, err := Parse("x", data)
		if err != nil {
			return
		}
		once := d.Bytes()
		d, err = Parse("x", once)
		if err != nil {
			t.Fatalf("refused what it wrote: %v\n%s", err, once)
		}
		if len(d.Mended) > 0 || !bytes.Equal(d.Bytes(), once) {
			t.Fatalf("written twice it differs:\n%s\n%s", once, d.Bytes())
		}
	})
}
