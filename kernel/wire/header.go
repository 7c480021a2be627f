package wire

import (
	"crypto/rand"
	"encoding/hex"
	"strconv"
	"sync/atomic"
	"time"
)

// A Header says what a message is and who sent it.
type Header struct {
	ID      string `json:"msg_id"`
	Session string `json:"session"`
	User    string `json:"username"`
	Date    string `json:"date"`
	Type    string `json:"msg_type"`
	Version string `json:"version"`
}

// Time returns the date of the header, and whether it has one that can be
// read.
func (h Header) Time() (time.Time, bool) {
	t, err := time.Parse(time.RFC3339Nano, h.Date)
	return t, err == nil
}

// dateLayout is ISO 8601 with a zone and six fraction digits: clients do not
// parse more.
const dateLayout = "2006-01-02T15:04:05.000000Z07:00"

// FormatDate writes t as headers carry it.
func FormatDate(t time.Time) string { return t.UTC().Format(dateLayout) }

// A Sender makes the headers of one party. Its methods may be called from
// several goroutines.
type Sender struct {
	session string
	user    string
	count   atomic.Uint64
}

// NewSender returns a sender with a session name of its own.
func NewSender(user string) *Sender {
	var b [16]byte
	rand.Read(b[:])
	return &Sender{session: hex.EncodeToString(b[:]), user: user}
}

// Session returns the name of the sender's session.
func (s *Sender) Session() string { return s.session }

// Header returns the header of a new message of type kind. No two have the
// same identifier: the same signed bytes sent twice would be refused as a
// replay.
func (s *Sender) Header(kind string) Header {
	return Header{
		ID:      s.session + "_" + strconv.FormatUint(s.count.Add(1), 10),
		Session: s.session,
		User:    s.user,
		Date:    FormatDate(time.Now()),
		Type:    kind,
		Version: Version,
	}
}
