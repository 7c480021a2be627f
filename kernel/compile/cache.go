package compile

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"time"
)

// defaultLimit bounds a cache of unset Limit: some 400 plugins that print, 60
// that draw.
const defaultLimit = 1 << 30

// justUsed is the age up to which nothing is evicted: another process may be
// about to open it.
const justUsed = 10 * time.Minute

// A Cache is a folder of built code, each file named by a hash of all that
// went into it. Files appear whole and are never changed, so any number of
// processes may use one folder. When the folder grows over the limit, those
// unused for longest go. The zero Limit means 1 GiB.
type Cache struct {
	Dir   string
	Limit int64

	mu   sync.Mutex // guards size
	size int64      // estimate of the folder's size; 0 until first counted
}

// name is where the file of a key stands; ext begins with a dot.
func (c *Cache) name(key, ext string) string {
	return filepath.Join(c.Dir, key[:2], key+ext)
}

// get returns the file of a key, and marks it as used.
func (c *Cache) get(key, ext string) (file string, ok bool) {
	file = c.name(key, ext)
	// An empty file is what a crash of the machine may leave: files are not
	// forced to the disk.
	if info, err := os.Stat(file); err != nil || info.Size() == 0 {
		return file, false
	}
	now := time.Now()
	os.Chtimes(file, now, now) // only the order of eviction suffers if it fails
	return file, true
}

// put moves a finished file, which lies in a folder made by scratch, to its
// key's place.
func (c *Cache) put(from, key, ext string) (string, error) {
	file := c.name(key, ext)
	info, err := os.Stat(from)
	if err != nil {
		return "", &CacheError{c.Dir, err}
	}
	if err := os.MkdirAll(filepath.Dir(file), 0o777); err != nil {
		return "", &CacheError{c.Dir, err}
	}
	if err := os.Rename(from, file); err != nil {
		return "", &CacheError{c.Dir, err}
	}
	c.grow(info.Size())
	return file, nil
}

// scratch makes a folder for one build, on the cache's file system.
func (c *Cache) scratch() (string, error) {
	parent := filepath.Join(c.Dir, "tmp")
	if err := os.MkdirAll(parent, 0o777); err != nil {
		return "", &CacheError{c.Dir, err}
	}
	dir, err := os.MkdirTemp(parent, "build-")
	if err != nil {
		return "", &CacheError{c.Dir, err}
	}
	return dir, nil
}

// grow counts n more bytes and evicts if that is too much.
func (c *Cache) grow(n int64) {
	c.mu.Lock()
	defer c.mu.Unlock()
	limit := c.Limit
	if limit == 0 {
		limit = defaultLimit
	}
	c.size += n
	if c.size != n && c.size <= limit {
		return
	}
	// The first file of this process, or too much by its own count: count
	// what all processes have put there.
	c.size = c.evict(limit, time.Now().Add(-justUsed))
}

// evict removes the files unused for longest until four fifths of the limit
// are left, but none used after the time recent, and returns what is left.
func (c *Cache) evict(limit int64, recent time.Time) int64 {
	type entry struct {
		file string
		size int64
		used time.Time
	}
	var all []entry
	var total int64
	tmp := filepath.Join(c.Dir, "tmp")
	filepath.WalkDir(c.Dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return nil // another process has removed it
		}
		info, err := d.Info()
		switch {
		case err != nil:
		case d.IsDir() && filepath.Dir(path) == tmp:
			if time.Since(info.ModTime()) > 24*time.Hour { // its process died
				os.RemoveAll(path)
			}
			return fs.SkipDir
		case d.IsDir():
		default:
			all = append(all, entry{path, info.Size(), info.ModTime()})
			total += info.Size()
		}
		return nil
	})
	if total <= limit {
		return total
	}
	slices.SortFunc(all, func(a, b entry) int {
		if c := a.used.Compare(b.used); c != 0 {
			return c
		}
		return strings.Compare(a.file, b.file)
	})
	for _, e := range all {
		if total <= limit/5*4 || e.used.After(recent) {
			break
		}
		if err := os.Remove(e.file); err == nil || errors.Is(err, fs.ErrNotExist) {
			total -= e.size
		}
	}
	return total
}
