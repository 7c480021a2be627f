package cell

import (
	"slices"
	"strings"
)

// firstChanges lists the names that the cell itself gives another meaning.
func (c *checking) firstChanges() map[string]bool {
	out := map[string]bool{}
	for _, d := range c.own {
		old := c.s.decls[d.key()]
		if old == nil || old.broken || old.text != d.text || !slices.Equal(old.names, d.names) || c.importsDiffer(old) {
			for _, n := range d.names {
				out[n] = true
			}
		}
		// A type declared again without a method that its own cell had.
		if old != nil && old.Source != d.Source {
			for _, n := range d.names {
				for _, m := range c.s.methods[n] {
					if m.Source == old.Source && !c.owns(m.key()) {
						out[n] = true
						c.broken[m] = nil
					}
				}
			}
		}
		if d.recv != "" && out[d.key()] {
			out[d.recv] = true // a type and its methods are one unit
		}
	}
	for _, v := range c.vars {
		if e := c.s.entities[v]; e != nil && e.decl != nil || c.s.decls[v] != nil {
			out[v] = true
		}
	}
	for name, path := range c.imports {
		if old := c.s.importPath(name); old != "" && old != path {
			for _, d := range c.s.decls {
				if d.pkgs[name] == old {
					out[d.key()] = true
				}
			}
		}
	}
	return out
}

func (c *checking) owns(key string) bool {
	return slices.ContainsFunc(c.own, func(d *Decl) bool { return d.key() == key })
}

// importsDiffer tells whether an import name that d uses means another path now.
func (c *checking) importsDiffer(d *Decl) bool {
	for name, path := range d.pkgs {
		if p, ok := c.imports[name]; ok && p != path {
			return true
		}
	}
	return false
}

// spread follows the changes to all that depends on them and fills redo and
// drop.
func (c *checking) spread() {
	queue := make([]string, 0, len(c.changed))
	for n := range c.changed {
		queue = append(queue, n)
	}
	in := map[*Decl]bool{}
	mark := func(n string) {
		if !c.changed[n] {
			c.changed[n] = true
			queue = append(queue, n)
		}
	}
	include := func(d *Decl) {
		if _, gone := c.broken[d]; gone || in[d] {
			return
		}
		in[d] = true
		for _, n := range d.names {
			mark(n)
		}
		if d.recv != "" {
			mark(d.recv)
		}
	}
	for len(queue) > 0 {
		n := queue[0]
		queue = queue[1:]
		if d := c.s.decls[n]; d != nil && !c.replaced(d) {
			include(d)
		}
		for _, m := range c.s.methods[n] {
			if !c.replaced(m) {
				include(m)
			}
		}
		for d := range c.s.users[n] {
			if own := c.ownDecl(d.key()); own != nil {
				for _, n := range own.names {
					mark(n)
				}
				if own.recv != "" {
					mark(own.recv)
				}
				continue
			}
			if !c.replaced(d) {
				include(d)
			}
		}
		for v := range c.s.typed[n] {
			if !c.drop[v] {
				c.drop[v] = true
				mark(v)
			}
		}
	}
	c.redo = c.redo[:0]
	for _, d := range c.own {
		if slices.ContainsFunc(d.names, func(n string) bool { return c.changed[n] }) || strings.Contains(d.key(), "#") || d.recv != "" && c.changed[d.recv] {
			c.redo = append(c.redo, d)
		}
	}
	var older []*Decl
	for d := range in {
		older = append(older, d)
	}
	slices.SortFunc(older, func(a, b *Decl) int {
		if a.Source.N != b.Source.N {
			return a.Source.N - b.Source.N
		}
		return int(a.node.Pos() - b.node.Pos())
	})
	c.redo = append(c.redo, older...)
}

func (c *checking) ownDecl(key string) *Decl {
	for _, d := range c.own {
		if slices.Contains(d.names, key) {
			return d
		}
	}
	return nil
}

// replaced tells whether the cell declares a name of an older decl anew.
func (c *checking) replaced(d *Decl) bool {
	for _, n := range d.names {
		if c.ownDecl(n) != nil || slices.Contains(c.vars, n) {
			return true
		}
	}
	return false
}

// isOwnName tells whether a decl of this cell has the name.
func (c *checking) isOwnName(n string) bool { return c.ownDecl(n) != nil }
