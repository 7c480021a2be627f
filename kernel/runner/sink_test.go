package runner

import (
	"encoding/json"
	"testing"

	"levelsum/display"
	"levelsum/kernel/cell"
)

// TestViewIsPlain looks for marker letters in all that a view holds.
func TestViewIsPlain(t *testing.T) {
	text := "cell/k0123456789abcdef." + cell.Marker + "level"
	v := wireView(display.View{Data: map[string]any{
		"text/plain":       text,
		"application/json": map[string]any{text: []any{text, 2.5}},
		"text/x-number":    1.5,
	}})
	b, err := json.Marshal(v.Data)
	if err != nil {
		t.Fatal(err)
	}
	if want := `{"application/json":{"cell.level":["cell.level",2.5]},"text/plain":"cell.level","text/x-number":1.5}`; string(b) != want {
		t.Errorf("%s, want %s", b, want)
	}
}
