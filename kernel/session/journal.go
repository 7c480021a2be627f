package session

import (
	"bufio"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"slices"
	"sync"

	"levelsum/kernel/engine"
)

// A Journal remembers the cells that have been run, so that they can be run
// again when the engine's values are lost. With a file it outlives the
// process; the file is removed by Close, unless Keep has said that another
// process follows. Its methods may be called from several goroutines.
type Journal struct {
	mu   sync.Mutex // guards the fields below
	live []Record   // run since the engine was started
	lost []Record   // had succeeded, and their values are gone
	kept bool       // lost by a restart that was asked for: another cell means that they are not wanted
	path string
	file *os.File // nil if there is none
	err  error    // the first error of writing
}

// A Record is one cell of a [Journal].
type Record struct {
	N      int    `json:"n"`
	ID     string `json:"id,omitempty"`
	Source string `json:"source"`
	OK     bool   `json:"ok"`
}

// line is one line of the file: a cell, a cell that was run again after it had
// been lost, or the loss of all values, which a reader may have asked for.
type line struct {
	Record
	Again bool `json:"again,omitempty"`
	Lost  bool `json:"lost,omitempty"`
	Kept  bool `json:"kept,omitempty"`
}

// NewJournal returns a journal without a file.
func NewJournal() *Journal { return &Journal{} }

// OpenJournal returns a journal that writes to the file at path. What a process
// that was killed has left there is lost and can be run again.
func OpenJournal(path string) (*Journal, error) {
	f, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE|os.O_APPEND, 0o600)
	if err != nil {
		return nil, err
	}
	j := &Journal{path: path, file: f}
	if err := errors.Join(f.Chmod(0o600), j.read()); err != nil {
		f.Close()
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	if len(j.live) > 0 {
		j.Lose()
	}
	return j, nil
}

// read takes what the lines of the file say. A last line that was cut by the
// end of a process is passed over, and ended.
func (j *Journal) read() error {
	in := bufio.NewReader(j.file)
	for {
		b, err := in.ReadBytes('\n')
		if err == io.EOF {
			if len(b) > 0 {
				_, err = j.file.WriteString("\n")
				return err
			}
			return nil
		}
		if err != nil {
			return err
		}
		var l line
		if json.Unmarshal(b, &l) == nil && (l.Lost || l.Source != "") {
			j.take(l)
		}
	}
}

func (j *Journal) take(l line) {
	switch {
	case l.Lost:
		j.lost = append(j.lost, slices.DeleteFunc(j.live, func(r Record) bool { return !r.OK })...)
		j.live = nil
		j.kept = l.Kept
	case l.Again && len(j.lost) > 0:
		j.lost = j.lost[1:]
		j.kept = false
		j.live = append(j.live, l.Record)
	default:
		if j.kept {
			j.lost, j.kept = nil, false
		}
		j.live = append(j.live, l.Record)
	}
}

// note takes l and writes it. An error of writing ends the file, not the
// journal.
func (j *Journal) note(l line) {
	j.mu.Lock()
	defer j.mu.Unlock()
	j.take(l)
	if j.file == nil {
		return
	}
	b, err := json.Marshal(l)
	if err == nil {
		_, err = j.file.Write(append(b, '\n'))
	}
	if err != nil {
		j.err = err
		j.file.Close()
		j.file = nil
	}
}

// Add records a cell that has been run.
func (j *Journal) Add(r Record) { j.note(line{Record: r}) }

// Lose says that all values are gone: the engine was started again.
func (j *Journal) Lose() { j.note(line{Lost: true}) }

// Keep says that the process ends at the reader's wish and another follows with
// the same file: Close leaves it. The cells can be run again there, unless
// another cell is run first; who begins anew does not want the old ones later.
func (j *Journal) Keep() {
	j.note(line{Lost: true, Kept: true})
	j.mu.Lock()
	defer j.mu.Unlock()
	j.path = ""
}

// Again says that the first lost cell has been run again and succeeded.
func (j *Journal) Again(r Record) { j.note(line{Record: r, Again: true}) }

// Live returns the cells run since the engine was started.
func (j *Journal) Live() []Record {
	j.mu.Lock()
	defer j.mu.Unlock()
	return slices.Clone(j.live)
}

// Lost returns the cells that had succeeded and whose values are gone.
func (j *Journal) Lost() []Record {
	j.mu.Lock()
	defer j.mu.Unlock()
	return slices.Clone(j.lost)
}

// Close removes the file: a session that ends well leaves nothing behind. The
// error is the first that writing or removing met.
func (j *Journal) Close() error {
	j.mu.Lock()
	defer j.mu.Unlock()
	err := j.err
	if j.file != nil {
		err = errors.Join(err, j.file.Close())
	}
	if j.path != "" {
		err = errors.Join(err, os.Remove(j.path))
	}
	j.file, j.path, j.err = nil, "", nil
	return err
}

// record notes how c ended. When the engine was started again, the reader is
// told how to get the values back.
func (s *Session) record(c engine.Cell, result engine.Outcome, out *output) {
	if result.Restarted {
		s.journal.Lose()
		if n := len(s.journal.Lost()); n > 0 {
			out.Stream("stderr", fmt.Sprintf("levelsum: the values of earlier cells are gone; a cell that is only %s runs the %d that had succeeded again\n", replayCall, n))
		}
		return
	}
	s.journal.Add(Record{N: c.N, ID: c.ID, Source: c.Source, OK: result.Fault == nil})
}
