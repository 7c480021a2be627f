package wire

import (
	"bytes"
	"encoding/json"
)

// A Message is one message of the protocol. The JSON parts are kept as they
// travel.
type Message struct {
	// Identities are the routing frames before the delimiter; for a broadcast,
	// its topic.
	Identities [][]byte
	// Header is what RawHeader says.
	Header Header
	// RawHeader, Parent, Metadata and Content are the four signed frames.
	RawHeader, Parent, Metadata, Content json.RawMessage
	// Buffers are the binary frames after the content.
	Buffers [][]byte
}

var empty = json.RawMessage("{}")

// New returns a message with header h that carries content, because of the
// message whose raw header is parent; a nil parent is none. Content is written
// by [Marshal], so that every value can be sent.
func New(h Header, parent json.RawMessage, content any) *Message {
	if len(parent) == 0 {
		parent = empty
	}
	return &Message{
		Header:    h,
		RawHeader: Marshal(h),
		Parent:    parent,
		Metadata:  empty,
		Content:   Marshal(content),
	}
}

// ParentID returns the identifier of the message that m answers, or "".
func (m *Message) ParentID() string {
	var h Header
	if json.Unmarshal(m.Parent, &h) != nil {
		return ""
	}
	return h.ID
}

// Decode reads the content of m into v. A field that the content leaves out or
// gives as null keeps the value it has in v.
func (m *Message) Decode(v any) error {
	return json.Unmarshal(m.Content, v)
}

// isObject reports whether b is one whole JSON object.
func isObject(b []byte) bool {
	b = bytes.TrimLeft(b, " \t\r\n")
	return len(b) > 0 && b[0] == '{' && json.Valid(b)
}
