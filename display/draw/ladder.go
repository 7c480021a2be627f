package draw

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

// ladder draws one column of a level diagram: a bar for each level, broken
// into as many parts as the level is degenerate; a pale bar under it as long
// as its population; labels beside them, moved apart where they would touch.
func (p *plan) ladder(q *panelPlan, l scene.Ladder) {
	fs := 0.9 * p.size
	col := q.box.w() / float64(len(p.f.Categories))
	x0 := q.box.x0 + col*(float64(l.Column)+0.1)
	x1 := q.box.x0 + col*(float64(l.Column)+0.9)
	texts := make([][]mark.Run, len(l.Y))
	wide := 0.0
	for i := range l.Y {
		t := ""
		if l.Labels != nil {
			t = l.Labels[i]
		}
		if l.Degeneracy != nil && l.Degeneracy[i] > most {
			t = strings.TrimSpace(t + "  g = " + strconv.Itoa(l.Degeneracy[i]))
		}
		if t != "" {
			texts[i] = mark.Upright(t)
			wide = max(wide, width(texts[i], fs))
		}
	}
	bar := x1
	if wide > 0 {
		bar = max(x1-wide-1.4*fs, x0+0.25*col)
	}
	var levels, pop, leaders path
	type labelled struct {
		i    int
		y, t float64 // of the level and of its text
	}
	var ls []labelled
	for i, v := range l.Y {
		y := q.y.place(v)
		if y < q.box.y0-0.01 || y > q.box.y1+0.01 {
			continue
		}
		g := 1
		if l.Degeneracy != nil && l.Degeneracy[i] > 1 && l.Degeneracy[i] <= most {
			g = l.Degeneracy[i]
		}
		gap := min(3, (bar-x0)/float64(3*g))
		w := (bar - x0 - gap*float64(g-1)) / float64(g)
		for k := range g {
			x := x0 + float64(k)*(w+gap)
			levels.move(x, y)
			levels.line(x+w, y)
		}
		if l.Population != nil && l.Population[i] > 0 {
			pop.move(x0, y)
			pop.line(x0+(bar-x0)*l.Population[i], y)
		}
		if texts[i] != nil {
			ls = append(ls, labelled{i, y, y})
		}
	}
	p.s.stroke(&pop, pen{paint: series(l.Colour).with(0.45), width: 5})
	p.s.stroke(&levels, pen{paint: series(l.Colour), width: 1.3})
	// From the bottom upwards, each label at least a line above the one below.
	slices.SortStableFunc(ls, func(a, b labelled) int {
		switch {
		case a.y > b.y:
			return -1
		case a.y < b.y:
			return 1
		}
		return 0
	})
	line := 1.12 * fs
	room := int((q.box.h() - 4) / line)
	if len(ls) > room { // keep every nth so that the rest can be read
		n := int(math.Ceil(float64(len(ls)) / float64(max(room, 1))))
		kept := ls[:0]
		for k := range ls {
			if k%n == 0 {
				kept = append(kept, ls[k])
			}
		}
		ls = kept
	}
	spread(len(ls), line, q.box.y0+0.6*fs, q.box.y1-0.6*fs,
		func(k int) float64 { return ls[k].y }, func(k int, y float64) { ls[k].t = y })
	for _, t := range ls {
		tx := bar + 1.2*fs
		if math.Abs(t.t-t.y) > 0.5 {
			leaders.move(bar+1.5, t.y)
			leaders.line(tx-2, t.t)
		} else {
			tx = bar + 0.5*fs
		}
		p.s.text(texts[t.i], tx, t.t+0.34*fs, fs, start, false, paint{ink: true, alpha: 1})
	}
	p.s.stroke(&leaders, pen{paint: paint{ink: true, alpha: 0.5}, width: 0.5})
}

// most is the largest degeneracy drawn as a broken bar.
const most = 9

// spread moves places that are given from the bottom upwards (descending y)
// apart to at least d, as little as possible, between top and bottom.
func spread(n int, d, top, bottom float64, get func(int) float64, set func(int, float64)) {
	// Blocks of labels that touch, each around the mean of its places.
	type block struct {
		sum   float64 // of place + k·d, so that its first label stands at sum/n
		n     int
		first int
	}
	var bs []block
	at := func(b block) float64 {
		y := b.sum / float64(b.n)
		y = min(y, bottom)
		return max(y, top+d*float64(b.n-1))
	}
	for k := range n {
		bs = append(bs, block{get(k), 1, k})
		for len(bs) > 1 {
			a, b := bs[len(bs)-2], bs[len(bs)-1]
			if at(a)-d*float64(a.n) >= at(b)-1e-9 {
				break
			}
			bs = bs[:len(bs)-2]
			bs = append(bs, block{a.sum + b.sum + d*float64(a.n*b.n), a.n + b.n, a.first})
		}
	}
	for _, b := range bs {
		for k := range b.n {
			set(b.first+k, at(b)-d*float64(k))
		}
	}
}
