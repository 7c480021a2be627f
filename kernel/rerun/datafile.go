package rerun

import (
	"bufio"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"go/scanner"
	"go/token"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"levelsum/kernel/notebook"
)

// A DataFile is a file that the numbers of a notebook come from: its name
// relative to the notebook's folder, what it holds and how much of it.
//
// Files that statmech/data has read are known for certain, by whatever name the
// cell opened them, and Rows is the number of rows of their tables. Others are
// known only by a string literal that names a file (Named); Rows then counts
// the lines that are neither empty nor comments, in a .csv or .tsv file without
// the header.
type DataFile struct {
	File   string `json:"file"`
	SHA256 string `json:"sha256"`
	Rows   int    `json:"rows"`
	Named  bool   `json:"named,omitempty"`
}

// findData returns the files that string literals of the code cells name,
// relative to the notebook's folder. A name that is put together when the cell
// runs is not seen.
func findData(d *notebook.Document, dir string) ([]DataFile, error) {
	var all []DataFile
	for _, c := range d.Cells() {
		if c.Kind() != notebook.Code {
			continue
		}
		for _, name := range literals(c.Source()) {
			if slices.ContainsFunc(all, func(f DataFile) bool { return f.File == name }) {
				continue
			}
			f, ok, err := describe(dir, name)
			if err != nil {
				return nil, err
			}
			if ok {
				all = append(all, f)
			}
		}
	}
	slices.SortFunc(all, func(a, b DataFile) int { return strings.Compare(a.File, b.File) })
	return all, nil
}

// literals returns the string literals of a cell that could be file names.
func literals(src string) []string {
	var s scanner.Scanner
	file := token.NewFileSet().AddFile("", -1, len(src))
	s.Init(file, []byte(src), func(token.Position, string) {}, 0)
	var out []string
	for {
		_, tok, lit := s.Scan()
		switch tok {
		case token.EOF:
			return out
		case token.STRING:
			if name, err := strconv.Unquote(lit); err == nil && len(name) < 1024 && strings.Contains(name, ".") && !strings.ContainsAny(name, "\n\x00") {
				out = append(out, name)
			}
		}
	}
}

func describe(dir, name string) (f DataFile, ok bool, err error) {
	path := filepath.FromSlash(name)
	spelled := path
	if filepath.IsAbs(path) {
		return f, false, nil // would put this machine's folders into the document
	}
	path = filepath.Join(dir, path)
	if info, err := os.Stat(path); err != nil || !info.Mode().IsRegular() {
		return f, false, nil
	}
	r, err := os.Open(path)
	if err != nil {
		return f, false, err
	}
	defer r.Close()
	h := sha256.New()
	lines := bufio.NewReader(io.TeeReader(r, h))
	f.File, f.Named = filepath.ToSlash(filepath.Clean(spelled)), true
	for start, blank, comment := true, true, false; ; {
		part, more, err := lines.ReadLine()
		if err == io.EOF {
			break
		}
		if err != nil {
			return f, false, fmt.Errorf("%s: %w", name, err)
		}
		if start {
			comment = len(part) > 0 && part[0] == '#'
			blank = true
		}
		blank = blank && strings.TrimSpace(string(part)) == ""
		if start = !more; start && !blank && !comment {
			f.Rows++
		}
	}
	if ext := filepath.Ext(name); f.Rows > 0 && (ext == ".csv" || ext == ".tsv") {
		f.Rows--
	}
	f.SHA256 = hex.EncodeToString(h.Sum(nil))
	return f, true, nil
}

// compareData compares the files by name and content; how it is known that a
// file was used does not count.
func compareData(old, cur []DataFile) []Finding {
	text := func(f DataFile) string { return fmt.Sprintf("%d rows, sha256 %.12s", f.Rows, f.SHA256) }
	var all []Finding
	for _, n := range cur {
		f := Finding{Kind: "data", Name: n.File, Verdict: New, Now: text(n)}
		if i := slices.IndexFunc(old, func(o DataFile) bool { return o.File == n.File }); i >= 0 {
			f.Old, f.Verdict = text(old[i]), Identical
			if old[i].SHA256 != n.SHA256 {
				f.Verdict = Moved
			}
		}
		all = append(all, f)
	}
	for _, o := range old {
		if !slices.ContainsFunc(cur, func(n DataFile) bool { return n.File == o.File }) {
			all = append(all, Finding{Kind: "data", Name: o.File, Verdict: Missing, Old: text(o)})
		}
	}
	return all
}
