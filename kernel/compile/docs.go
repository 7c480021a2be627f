package compile

import (
	"encoding/json"
	"os"
	"path/filepath"
	"slices"

	"levelsum/kernel/symbols/export"
)

// docsName is the folder of a kit that holds the documentation of packages, a
// JSON file each. It is read at installation, when the source of everything is
// there: later the module cache may be cleaned and the source moved.
const docsName = "doc"

// DocsDir is the folder with the documentation that the kit has, in files as
// [export.Docs] by import path; it may not exist.
func (t *Types) DocsDir() string { return filepath.Join(t.Dir, docsName) }

// storeDocs writes the documentation of those of the packages that are in paths.
func storeDocs(dir string, pkgs []listed, paths []string) error {
	for _, p := range pkgs {
		if p.Dir == "" || !slices.Contains(paths, p.ImportPath) {
			continue
		}
		data, err := json.Marshal(export.ReadDocs(p.Dir))
		if err != nil {
			return err
		}
		file := filepath.Join(dir, filepath.FromSlash(p.ImportPath)+".json")
		if err := os.MkdirAll(filepath.Dir(file), 0o777); err != nil {
			return err
		}
		if err := os.WriteFile(file, data, 0o666); err != nil {
			return err
		}
	}
	return nil
}
