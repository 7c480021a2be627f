package main

import (
	"bytes"
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

// register writes the kernelspec; changed is false if it was there already.
func register(dir, executable string) (changed bool, err error) {
	data, err := json.MarshalIndent(specFor(executable), "", "  ")
	if err != nil {
		return false, err
	}
	data = append(data, '\n')
	file := filepath.Join(dir, "kernel.json")
	if old, err := os.ReadFile(file); err == nil && bytes.Equal(old, data) {
		return false, nil
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return false, err
	}
	tmp, err := os.CreateTemp(dir, ".kernel-*")
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
