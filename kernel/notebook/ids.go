package notebook

import (
	"crypto/sha256"
	"fmt"
)

// addIDs gives every cell of a document of version 4.5 or later an id of its
// own. It must not be random: the same file read twice is the same document.
func (d *Document) addIDs() {
	if d.minor < 5 {
		return
	}
	taken := map[string]bool{}
	for _, c := range d.cells {
		taken[c.ID()] = true
	}
	seen := map[string]bool{}
	for _, c := range d.cells {
		old := c.ID()
		if old != "" && !seen[old] {
			seen[old] = true
			continue
		}
		id := ""
		for try := 0; id == "" || taken[id]; try++ {
			sum := sha256.Sum256(fmt.Appendf(nil, "%d %d %s", c.N, try, c.Source()))
			id = fmt.Sprintf("%x", sum[:4])
		}
		taken[id], seen[id] = true, true
		c.v.set("id", newText(id))
		if old == "" {
			d.Mended = append(d.Mended, fmt.Sprintf("cell %d had no id and got %s", c.N, id))
		} else {
			d.Mended = append(d.Mended, fmt.Sprintf("cell %d had the id %s of an earlier cell and got %s", c.N, old, id))
		}
	}
}
