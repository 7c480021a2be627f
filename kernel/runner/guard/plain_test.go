package guard

import (
	"bytes"
	"fmt"
	"os"
	"testing"
)

func TestPlain(t *testing.T) {
	for text, want := range map[string]string{
		"": "",
		"plain text, cell/keep, Σ⟨E⟩, ⱮⰀ":       "plain text, cell/keep, Σ⟨E⟩, ⱮⰀ",
		"cell.Ɐlevel{Ɐe:1}Ɒ":                    "cell.level{e:1}",
		"cell.Ɐpair[cell/k0123456789abcdef.Ɐt]": "cell.pair[cell.t]",
		"cell/k0123456789abcdeg.x":              "cell/k0123456789abcdeg.x",
		"cell/k0123456789abcde":                 "cell/k0123456789abcde",
		"\xe2\xb1":                              "\xe2\xb1",
		"Ɐ\xe2\xb1":                             "\xe2\xb1",
	} {
		if got := Plain(text); got != want {
			t.Errorf("%q: %q, want %q", text, got, want)
		}
		var b bytes.Buffer
		if _, err := fmt.Fprint(Out(&b), text); err != nil || b.String() != want {
			t.Errorf("written: %q: %q %v, want %q", text, b.String(), err, want)
		}
	}
	if Out(os.Stdout) != os.Stdout || Out(nil) != nil {
		t.Error("a writer whose text is cleaned elsewhere is wrapped")
	}
}
