package rerun

import (
	"errors"
	"fmt"
	"strings"

	"levelsum/kernel/notebook"
)

// ErrLanguage is matched by the error of a document whose cells are in another
// language.
var ErrLanguage = errors.New("not a notebook of Go cells")

// CheckLanguage refuses a document that says that its cells are in another
// language than Go: running it would put faults in the place of its outputs. A
// document that does not say is taken for one of ours.
func CheckLanguage(d *notebook.Document) error {
	name, _ := d.Metadata("kernelspec", "name").(string)
	language, _ := d.Metadata("kernelspec", "language").(string)
	if language == "" {
		language, _ = d.Metadata("language_info", "name").(string)
	}
	if language == "" || strings.EqualFold(language, "go") || name == "levelsum" {
		return nil
	}
	return fmt.Errorf("%w: its metadata say that they are in %s; if they are in Go, choose the kernel Levelsum in a front end and save it, or take kernelspec and language_info out of the metadata", ErrLanguage, language)
}
