package main

import (
	"bytes"
	"embed"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"slices"
)

// A kernelspec is the file by which front ends find a kernel.
type kernelspec struct {
	Argv          []string `json:"argv"`
	DisplayName   string   `json:"display_name"`
	Language      string   `json:"language"`
	InterruptMode string   `json:"interrupt_mode"`
}

// specFor is the kernelspec that starts an executable.
func specFor(executable string) kernelspec {
	return kernelspec{
		Argv:          []string{executable, "serve", "{connection_file}"},
		DisplayName:   "Levelsum (Go)",
		Language:      "go",
		InterruptMode: "message",
	}
}

// dataFolder is where front ends look for what a user has installed: below
// prefix if that is not empty, in JUPYTER_DATA_DIR, in the active virtual
// environment, or where the platform keeps it.
func dataFolder(prefix string) (string, error) {
	if prefix != "" {
		abs, err := filepath.Abs(prefix)
		return filepath.Join(abs, "share", "jupyter"), err
	}
	if dir := os.Getenv("JUPYTER_DATA_DIR"); dir != "" {
		return filepath.Abs(dir)
	}
	if dir := os.Getenv("VIRTUAL_ENV"); dir != "" {
		return filepath.Join(dir, "share", "jupyter"), nil
	}
	home, err := os.UserHomeDir()
	if err != nil {
		return "", fmt.Errorf("there is no home folder to register the kernel in; name a folder with -prefix: %w", err)
	}
	if runtime.GOOS == "darwin" {
		return filepath.Join(home, "Library", "Jupyter"), nil
	}
	if dir := os.Getenv("XDG_DATA_HOME"); dir != "" {
		return filepath.Join(dir, "jupyter"), nil
	}
	return filepath.Join(home, ".local", "share", "jupyter"), nil
}

// specFolder is the folder of our kernelspec.
func specFolder(prefix string) (string, error) {
	dir, err := dataFolder(prefix)
	return filepath.Join(dir, "kernels", "levelsum"), err
}

//go:generate go run logo/generate.go
//go:embed logo/logo-svg.svg logo/logo-32x32.png logo/logo-64x64.png
var logos embed.FS

// register writes the kernelspec and its logos; changed is false if they were
// there already.
func register(dir, executable string) (changed bool, err error) {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return false, err
	}
	entries, err := logos.ReadDir("logo")
	if err != nil {
		return false, err
	}
	for _, e := range entries {
		data, err := logos.ReadFile("logo/" + e.Name())
		if err != nil {
			return false, err
		}
		wrote, err := replace(filepath.Join(dir, e.Name()), data)
		if err != nil {
			return false, err
		}
		changed = changed || wrote
	}
	data, err := json.MarshalIndent(specFor(executable), "", "  ")
	if err != nil {
		return false, err
	}
	// Last, as it makes the folder a kernelspec.
	wrote, err := replace(filepath.Join(dir, "kernel.json"), append(data, '\n'))
	return changed || wrote, err
}

// replace writes a file, whole or not at all; changed is false if it held data
// already.
func replace(file string, data []byte) (changed bool, err error) {
	if old, err := os.ReadFile(file); err == nil && bytes.Equal(old, data) {
		return false, nil
	}
	tmp, err := os.CreateTemp(filepath.Dir(file), ".new-*")
	if err != nil {
		return false, err
	}
	defer os.Remove(tmp.Name())
	_, err = tmp.Write(data)
	if err = errors.Join(err, tmp.Chmod(0o644), tmp.Close()); err != nil {
		return false, err
	}
	return true, os.Rename(tmp.Name(), file)
}

// unregister removes the kernelspec in dir if it is one of ours; removed is
// false if there is none.
func unregister(dir string) (removed bool, err error) {
	data, err := os.ReadFile(filepath.Join(dir, "kernel.json"))
	if errors.Is(err, fs.ErrNotExist) {
		return false, nil
	}
	if err != nil {
		return false, err
	}
	var s kernelspec
	if err := json.Unmarshal(data, &s); err != nil || len(s.Argv) != 3 || !slices.Equal(s.Argv[1:], specFor("").Argv[1:]) {
		return false, fmt.Errorf("the kernel in %s is not one that levelsum install has written; it stays", dir)
	}
	return true, os.RemoveAll(dir)
}
