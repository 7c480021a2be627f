package session

import (
	"regexp"
	"strings"
	"sync"

	"levelsum/kernel/wire"
)

// A history is what has been run, in order. It ends with the session.
type history struct {
	mu      sync.Mutex // guards entries
	entries []entry
}

type entry struct {
	number int
	source string
	output string // the value as text, "" if there was none
}

// thisSession is the number of the session in answers. Requests mean it by 0
// as well; there is no other.
const thisSession = 1

func (h *history) add(e entry) {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.entries = append(h.entries, e)
}

// find returns the entries that q asks for, oldest first.
func (h *history) find(q wire.HistoryRequest) []entry {
	h.mu.Lock()
	defer h.mu.Unlock()
	switch q.Access {
	case "range":
		return h.within(q)
	case "tail":
		return last(h.entries, q.N)
	case "search":
		return h.search(q)
	}
	return nil
}

// within returns the entries with Start <= number < Stop.
func (h *history) within(q wire.HistoryRequest) []entry {
	if q.Session != 0 && q.Session != thisSession {
		return nil
	}
	var found []entry
	for _, e := range h.entries {
		if e.number >= q.Start && (q.Stop == nil || e.number < *q.Stop) {
			found = append(found, e)
		}
	}
	return found
}

// search returns the last N entries whose whole source matches the pattern;
// with Unique, of equal ones the last.
func (h *history) search(q wire.HistoryRequest) []entry {
	pattern := q.Pattern
	if pattern == "" {
		pattern = "*"
	}
	match := glob(pattern)
	var found []entry
	at := map[string]int{}
	for _, e := range h.entries {
		if !match.MatchString(e.source) {
			continue
		}
		if i, ok := at[e.source]; ok && q.Unique {
			found[i].number = 0
		}
		at[e.source] = len(found)
		found = append(found, e)
	}
	if q.Unique {
		kept := found[:0]
		for _, e := range found {
			if e.number > 0 {
				kept = append(kept, e)
			}
		}
		found = kept
	}
	return last(found, q.N)
}

// last returns the last n entries, all if n is nil.
func last(entries []entry, n *int) []entry {
	if n == nil || *n >= len(entries) {
		return entries[:len(entries):len(entries)]
	}
	return entries[len(entries)-max(*n, 0):]
}

// glob compiles a pattern in which * stands for any text, ? for any character
// and [abc] for one of a set, [!abc] for one outside it.
func glob(pattern string) *regexp.Regexp {
	var b strings.Builder
	b.WriteString(`(?s)\A`)
	for i := 0; i < len(pattern); i++ {
		switch c := pattern[i]; c {
		case '*':
			b.WriteString(`.*`)
		case '?':
			b.WriteString(`.`)
		case '[':
			end := strings.IndexByte(pattern[min(i+2, len(pattern)):], ']')
			if end < 0 {
				b.WriteString(`\[`)
				continue
			}
			set := pattern[i+1 : i+2+end]
			b.WriteByte('[')
			if set[0] == '!' || set[0] == '^' {
				b.WriteByte('^')
				set = set[1:]
			}
			b.WriteString(strings.NewReplacer(`\`, `\\`, `[`, `\[`, `]`, `\]`, `^`, `\^`).Replace(set))
			b.WriteByte(']')
			i += 2 + end
		default:
			if c < 0x80 {
				b.WriteString(regexp.QuoteMeta(string(rune(c))))
			} else {
				b.WriteByte(c)
			}
		}
	}
	b.WriteString(`\z`)
	re, err := regexp.Compile(b.String())
	if err != nil {
		// A set that makes no sense, such as [z-a], stands for itself.
		return regexp.MustCompile(`(?s)\A` + regexp.QuoteMeta(strings.ToValidUTF8(pattern, "")) + `\z`)
	}
	return re
}

// answerHistory lists earlier input.
func (s *Session) answerHistory(r *request) {
	var q wire.HistoryRequest
	if err := r.msg.Decode(&q); err != nil {
		r.fail("history_reply", err)
		return
	}
	list := [][3]any{}
	for _, e := range s.history.find(q) {
		var what any = e.source
		if q.Output {
			var output any
			if e.output != "" {
				output = e.output
			}
			what = [2]any{e.source, output}
		}
		list = append(list, [3]any{thisSession, e.number, what})
	}
	r.reply("history_reply", wire.HistoryReply{Status: wire.StatusOK, History: list})
}
