package notebook

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
)

// published returns the schema that the format's own tools validate with
// (testdata/nbformat/SOURCE).
func published(t *testing.T, minor int) *jsonschema.Schema {
	t.Helper()
	s, err := jsonschema.NewCompiler().Compile(filepath.Join("..", "..", "testdata", "nbformat", fmt.Sprintf("nbformat.v4.%d.schema.json", minor)))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func obeys(t *testing.T, s *jsonschema.Schema, data []byte) error {
	t.Helper()
	x, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	return s.Validate(x)
}

// TestAgainstPublishedSchema breaks documents of every version in every place
// (each value by each other kind of value, each key left out) and holds the
// verdict of Parse against the published schema's. The versions between the
// first and the last share the changes out, a quarter each.
func TestAgainstPublishedSchema(t *testing.T) {
	for minor := range 6 {
		t.Run(fmt.Sprintf("4.%d", minor), func(t *testing.T) {
			schema := published(t, minor)
			file := filepath.Join("testdata", fmt.Sprintf("v4.%d.ipynb", minor))
			data, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			if err := obeys(t, schema, data); err != nil {
				t.Fatalf("%s: not valid by the published schema: %v", file, err)
			}
			root, err := parse(data)
			if err != nil {
				t.Fatal(err)
			}
			turn, tried, refused := 0, 0, 0
			try := func(what string) {
				if turn++; minor > 0 && minor < 5 && turn%4 != minor%4 {
					return
				}
				tried++
				broken := append(root.write(nil, 0), '\n')
				want := obeys(t, schema, broken)
				d, got := Parse("x.ipynb", broken)
				if got != nil {
					refused++
				}
				switch {
				case want == nil && got != nil:
					t.Errorf("%s: refused, but the schema lets it through: %v", what, got)
				case want != nil && got == nil:
					// Allowed: what Parse mended, once it is written.
					if err := obeys(t, schema, d.Bytes()); err != nil {
						t.Errorf("%s: let through, but the schema says: %v", what, err)
					}
				}
			}
			walk(root, "", try)
			if tried < 400 || refused < 200 {
				t.Errorf("tried %d documents and refused %d; the test does not reach the rules", tried, refused)
			}
			t.Logf("%d documents, %d refused", tried, refused)
		})
	}
}

// walk changes every place below v, calls try, and puts the place back.
func walk(v *value, at string, try func(string)) {
	other := []*value{newNull(), {kind: boolean, lit: "true"}, {kind: number, lit: "1"}, {kind: number, lit: "-1"}, {kind: number, lit: "1.5"},
		{kind: number, lit: "4.0"}, newText(""), newText("a,b"), newText("auto"), newText("\n"), {kind: array}, {kind: array, items: []*value{newText("s")}},
		{kind: array, items: []*value{newText("s"), newText("s")}}, {kind: array, items: []*value{newInt(1)}}, {kind: object},
		{kind: object, members: []member{{key: "a", lit: `"a"`, val: newInt(1)}}}}
	for i := range v.items {
		old := v.items[i]
		for _, w := range other {
			v.items[i] = w
			try(fmt.Sprintf("%s[%d] = %s", at, i, w.write(nil, 0)))
		}
		v.items[i] = old
		walk(old, fmt.Sprintf("%s[%d]", at, i), try)
	}
	for i := range v.members {
		m := v.members[i]
		place := at + "." + m.key
		// The version is another test's subject: the schema of one version
		// cannot judge a document of another.
		if place == ".nbformat" || place == ".nbformat_minor" {
			continue
		}
		for _, w := range other {
			v.members[i].val = w
			try(fmt.Sprintf("%s = %s", place, w.write(nil, 0)))
		}
		v.members[i] = m
		rest := v.members
		v.members = append(append([]member{}, rest[:i]...), rest[i+1:]...)
		try(place + " left out")
		v.members = rest
		walk(m.val, place, try)
	}
}
