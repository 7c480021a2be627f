package wire

import (
	"bytes"
	"crypto/hmac"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"hash"
	"maps"
	"slices"
	"strings"
	"sync"
)

// A Reason says why a message was dropped.
type Reason string

// The reasons for a drop.
const (
	NoDelimiter  Reason = "no delimiter"
	TooShort     Reason = "too short"
	NotSigned    Reason = "not signed"
	BadSignature Reason = "wrong signature"
	Replayed     Reason = "replayed"
	BadJSON      Reason = "not JSON"
)

// A DropError is the error for a message that was dropped.
type DropError struct {
	Reason Reason
	// Part names the frame at fault, if one is.
	Part string
}

func (e *DropError) Error() string {
	if e.Part == "" {
		return "wire: message dropped: " + string(e.Reason)
	}
	return "wire: message dropped: " + e.Part + ": " + string(e.Reason)
}

var delimiter = []byte("<IDS|MSG>")

// remembered is how many signatures are kept to tell a replay.
const remembered = 1 << 16

// A Codec turns messages into frames and frames into messages with one key.
// Its methods may be called from several goroutines.
type Codec struct {
	key []byte

	mu      sync.Mutex // guards the fields below
	mac     hash.Hash
	seen    map[[sha256.Size]byte]struct{}
	ring    [][sha256.Size]byte // the keys of seen, oldest at next when full
	next    int
	dropped map[Reason]int
}

// NewCodec returns a codec that signs with key; an empty key means that
// nothing is signed.
func NewCodec(key []byte) *Codec {
	return &Codec{
		key:     slices.Clone(key),
		mac:     hmac.New(sha256.New, key),
		seen:    map[[sha256.Size]byte]struct{}{},
		dropped: map[Reason]int{},
	}
}

// Format returns the frames of m, signed.
func (c *Codec) Format(m *Message) [][]byte {
	frames := make([][]byte, 0, len(m.Identities)+6+len(m.Buffers))
	frames = append(frames, m.Identities...)
	frames = append(frames, delimiter, nil)
	signed := len(frames)
	frames = append(frames, m.RawHeader, m.Parent, m.Metadata, m.Content)
	if len(c.key) > 0 {
		c.mu.Lock()
		sum := c.sum(frames[signed:])
		c.mu.Unlock()
		frames[signed-1] = hex.AppendEncode(nil, sum[:])
	} else {
		frames[signed-1] = []byte{}
	}
	return append(frames, m.Buffers...)
}

// Parse returns the message that frames hold. The message keeps the frames:
// the caller may not change them afterwards. The error is a [*DropError].
func (c *Codec) Parse(frames [][]byte) (*Message, error) {
	m, err := c.parse(frames)
	if err != nil {
		c.mu.Lock()
		c.dropped[err.Reason]++
		c.mu.Unlock()
		return nil, err
	}
	return m, nil
}

func (c *Codec) parse(frames [][]byte) (*Message, *DropError) {
	at := slices.IndexFunc(frames, func(f []byte) bool { return bytes.Equal(f, delimiter) })
	if at < 0 {
		return nil, &DropError{Reason: NoDelimiter}
	}
	rest := frames[at+1:]
	if len(rest) < 5 {
		return nil, &DropError{Reason: TooShort}
	}
	if err := c.check(rest[0], rest[1:5]); err != nil {
		return nil, err
	}
	for i, name := range []string{"header", "parent header", "metadata", "content"} {
		if !isObject(rest[1+i]) {
			return nil, &DropError{Reason: BadJSON, Part: name}
		}
	}
	m := &Message{
		Identities: frames[:at:at],
		RawHeader:  rest[1],
		Parent:     rest[2],
		Metadata:   rest[3],
		Content:    rest[4],
		Buffers:    rest[5:],
	}
	if json.Unmarshal(m.RawHeader, &m.Header) != nil {
		return nil, &DropError{Reason: BadJSON, Part: "header"}
	}
	return m, nil
}

// check checks signature against the signed frames and remembers it.
func (c *Codec) check(signature []byte, signed [][]byte) *DropError {
	if len(c.key) == 0 {
		return nil
	}
	if len(signature) == 0 {
		return &DropError{Reason: NotSigned}
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	sum := c.sum(signed)
	// The comparison is of the text, since decoding would let upper-case hex
	// through, and takes the same time wherever the two differ.
	if !hmac.Equal(signature, hex.AppendEncode(nil, sum[:])) {
		return &DropError{Reason: BadSignature}
	}
	if _, ok := c.seen[sum]; ok {
		return &DropError{Reason: Replayed}
	}
	if len(c.ring) < remembered {
		c.ring = append(c.ring, sum)
	} else {
		delete(c.seen, c.ring[c.next])
		c.ring[c.next] = sum
		c.next = (c.next + 1) % remembered
	}
	c.seen[sum] = struct{}{}
	return nil
}

// sum returns the signature of frames; c.mu is held.
func (c *Codec) sum(frames [][]byte) (sum [sha256.Size]byte) {
	c.mac.Reset()
	for _, f := range frames {
		c.mac.Write(f)
	}
	c.mac.Sum(sum[:0])
	return sum
}

// Dropped returns how many messages were dropped, by reason.
func (c *Codec) Dropped() map[Reason]int {
	c.mu.Lock()
	defer c.mu.Unlock()
	return maps.Clone(c.dropped)
}

// DroppedText says in words what [Codec.Dropped] counts; "" if it is nothing.
func (c *Codec) DroppedText() string {
	counts := c.Dropped()
	total := 0
	var parts []string
	for _, r := range slices.Sorted(maps.Keys(counts)) {
		total += counts[r]
		parts = append(parts, fmt.Sprintf("%s: %d", r, counts[r]))
	}
	if total == 0 {
		return ""
	}
	return fmt.Sprintf("%d messages dropped (%s)", total, strings.Join(parts, ", "))
}
