package compile

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"time"
)

// Probe builds a plugin that imports all of the module's own packages that
// cells may import. If the running program can open it, it can open what else
// the kit builds.
func (k *Kit) Probe(ctx context.Context) (*Plugin, error) {
	var b strings.Builder
	b.WriteString("package main\n\nimport (\n\t_ \"fmt\"\n")
	for _, a := range k.Manifest.Archives {
		if !a.Standard && strings.HasPrefix(a.Path, k.Manifest.Module+"/") {
			fmt.Fprintf(&b, "\t_ %q\n", a.Path)
		}
	}
	b.WriteString(")\n")
	return k.Build(ctx, nil, Package{Files: map[string][]byte{"probe.go": []byte(b.String())}})
}

// Kits lists the folders of kits below the root, of any build.
func Kits() ([]string, error) {
	root, err := Root()
	if err != nil {
		return nil, err
	}
	return filepath.Glob(filepath.Join(root, "kit", "*"))
}

// SourceOf returns the folder of the source of a kit that was made for an
// executable, also for an earlier build of it; empty if there is none.
func SourceOf(executable string) string {
	dirs, _ := Kits()
	for _, dir := range dirs {
		if m, err := readManifest(dir); err == nil && m.Executable == executable {
			return m.Source
		}
	}
	return ""
}

// Retire removes the kits whose executable is gone or has been built anew, and
// what unfinished preparations left behind; it returns their folders. A kit
// that was made for no executable stays, and so does one that a process still
// uses: notebooks that are open while levelsum is installed anew go on.
func Retire() (removed []string, err error) {
	dirs, err := Kits()
	if err != nil {
		return nil, err
	}
	for _, dir := range dirs {
		if !obsolete(dir) || held(dir) {
			continue
		}
		if e := os.RemoveAll(dir); e != nil {
			err = errors.Join(err, e)
			continue
		}
		removed = append(removed, dir)
	}
	return removed, err
}

func obsolete(dir string) bool {
	if strings.Contains(filepath.Base(dir), ".new-") {
		info, err := os.Stat(dir)
		return err == nil && time.Since(info.ModTime()) > 24*time.Hour
	}
	m, err := readManifest(dir)
	if err != nil || m.Executable == "" {
		return false
	}
	id, err := BuildID(m.Executable)
	if errors.Is(err, fs.ErrNotExist) {
		return true
	}
	return err == nil && KitName(id) != filepath.Base(dir)
}

func readManifest(dir string) (*Manifest, error) {
	data, err := os.ReadFile(filepath.Join(dir, manifestName))
	if err != nil {
		return nil, err
	}
	var m Manifest
	return &m, json.Unmarshal(data, &m)
}
