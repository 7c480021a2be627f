package wire

import (
	"bytes"
	"crypto/hmac"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"slices"
	"strings"
	"testing"
)

// sign is the signature as the protocol's description has it, written here
// again so that the codec is not checked against itself.
func sign(key string, parts ...string) string {
	mac := hmac.New(sha256.New, []byte(key))
	mac.Write([]byte(strings.Join(parts, "")))
	return hex.EncodeToString(mac.Sum(nil))
}

// multipart turns strings into frames.
func multipart(parts ...string) [][]byte {
	frames := make([][]byte, len(parts))
	for i, p := range parts {
		frames[i] = []byte(p)
	}
	return frames
}

const header = `{"msg_id":"m1","session":"s","username":"u","date":"2026-01-02T03:04:05.678901Z","msg_type":"kernel_info_request","version":"5.3"}`

// A signature that another implementation of HMAC made:
// printf '{}{}{}{}' | openssl dgst -sha256 -hmac key
func TestSignatureAgainstOpenSSL(t *testing.T) {
	const want = "ca767b02c5bc061ed184a9a029e7f93a7f2f7ed4e8fe74120fc1212f0b008fa3"
	m := &Message{RawHeader: empty, Parent: empty, Metadata: empty, Content: empty}
	frames := NewCodec([]byte("key")).Format(m)
	if got := string(frames[1]); got != want {
		t.Errorf("signature of four empty objects with the key %q = %s, want %s", "key", got, want)
	}
}

func TestParseDrops(t *testing.T) {
	good := sign("key", header, "{}", "{}", "{}")
	for _, test := range []struct {
		name   string
		frames [][]byte
		want   Reason // "" if the message is accepted
	}{
		{"right", multipart("<IDS|MSG>", good, header, "{}", "{}", "{}"), ""},
		{"an identity", multipart("id", "<IDS|MSG>", good, header, "{}", "{}", "{}"), ""},
		{"three identities and two buffers", multipart("a", "", "c", "<IDS|MSG>", good, header, "{}", "{}", "{}", "b1", "\xff\x00"), ""},
		{"nothing", nil, NoDelimiter},
		{"an empty frame", multipart(""), NoDelimiter},
		{"no delimiter", multipart("id", good, header, "{}", "{}", "{}"), NoDelimiter},
		{"delimiter misspelt", multipart("<ids|msg>", good, header, "{}", "{}", "{}"), NoDelimiter},
		{"content missing", multipart("<IDS|MSG>", good, header, "{}", "{}"), TooShort},
		{"delimiter alone", multipart("<IDS|MSG>"), TooShort},
		{"signature empty", multipart("<IDS|MSG>", "", header, "{}", "{}", "{}"), NotSigned},
		{"wrong key", multipart("<IDS|MSG>", sign("other", header, "{}", "{}", "{}"), header, "{}", "{}", "{}"), BadSignature},
		{"upper-case hex", multipart("<IDS|MSG>", strings.ToUpper(good), header, "{}", "{}", "{}"), BadSignature},
		{"a digit short", multipart("<IDS|MSG>", good[:63], header, "{}", "{}", "{}"), BadSignature},
		{"content changed", multipart("<IDS|MSG>", good, header, "{}", "{}", `{"a":1}`), BadSignature},
		{"signed, header not JSON", multipart("<IDS|MSG>", sign("key", "{", "{}", "{}", "{}"), "{", "{}", "{}", "{}"), BadJSON},
		{"signed, content not JSON", multipart("<IDS|MSG>", sign("key", header, "{}", "{}", "nope"), header, "{}", "{}", "nope"), BadJSON},
		{"signed, content a list", multipart("<IDS|MSG>", sign("key", header, "{}", "{}", "[]"), header, "{}", "{}", "[]"), BadJSON},
		{"signed, two objects", multipart("<IDS|MSG>", sign("key", header, "{}", "{}", "{}{}"), header, "{}", "{}", "{}{}"), BadJSON},
		{"signed, msg_id a number", multipart("<IDS|MSG>", sign("key", `{"msg_id":1}`, "{}", "{}", "{}"), `{"msg_id":1}`, "{}", "{}", "{}"), BadJSON},
	} {
		t.Run(test.name, func(t *testing.T) {
			c := NewCodec([]byte("key"))
			m, err := c.Parse(test.frames)
			if test.want == "" {
				if err != nil {
					t.Fatalf("Parse: %v", err)
				}
				if m.Header.ID != "m1" || m.Header.Type != "kernel_info_request" {
					t.Errorf("header = %+v", m.Header)
				}
				if n := len(c.Dropped()); n != 0 {
					t.Errorf("an accepted message was counted as dropped: %v", c.Dropped())
				}
				if got := c.Format(m); !slices.EqualFunc(got, test.frames, bytes.Equal) {
					t.Errorf("Format(Parse(x)) = %q, want %q", got, test.frames)
				}
				return
			}
			drop, ok := errors.AsType[*DropError](err)
			if !ok || drop.Reason != test.want {
				t.Fatalf("Parse: error %v, want the reason %q", err, test.want)
			}
			if got := c.Dropped(); len(got) != 1 || got[test.want] != 1 {
				t.Errorf("Dropped() = %v, want one %q", got, test.want)
			}
		})
	}
}

func TestReplayIsDropped(t *testing.T) {
	c := NewCodec([]byte("key"))
	frames := multipart("<IDS|MSG>", sign("key", header, "{}", "{}", "{}"), header, "{}", "{}", "{}")
	if _, err := c.Parse(frames); err != nil {
		t.Fatal(err)
	}
	// Other identities and buffers do not make it another message: they are not signed.
	for _, replay := range [][][]byte{
		frames,
		append(multipart("other"), frames...),
		append(slices.Clone(frames), []byte("buffer")),
	} {
		if _, err := c.Parse(replay); err == nil {
			t.Errorf("Parse(%q) accepted a replay", replay)
		}
	}
	if got := c.Dropped()[Replayed]; got != 3 {
		t.Errorf("%d replays counted, want 3", got)
	}
	if got, want := c.DroppedText(), "3 messages dropped (replayed: 3)"; got != want {
		t.Errorf("DroppedText() = %q, want %q", got, want)
	}
}

func TestReplayMemoryIsBounded(t *testing.T) {
	c := NewCodec([]byte("key"))
	h := NewSender("u")
	for range remembered + 10 {
		if _, err := c.Parse(c.Format(New(h.Header("x"), nil, map[string]any{}))); err != nil {
			t.Fatal(err)
		}
	}
	if len(c.seen) != remembered || len(c.ring) != remembered {
		t.Errorf("%d signatures and %d in order are kept, want %d", len(c.seen), len(c.ring), remembered)
	}
}

func TestEmptyKeySignsNothing(t *testing.T) {
	c := NewCodec(nil)
	frames := multipart("<IDS|MSG>", "", header, "{}", "{}", "{}")
	for range 2 {
		m, err := c.Parse(frames)
		if err != nil {
			t.Fatal(err)
		}
		if got := c.Format(m); len(got[1]) != 0 {
			t.Errorf("signature = %q, want none", got[1])
		}
	}
}

func TestReplyCarriesTheParentUnchanged(t *testing.T) {
	// Order, spacing, unknown fields and escapes of the header are the client's.
	odd := `{ "version":"5.4",  "msg_id":"\u00fc", "extra":[1, 2.50], "msg_type":"x" }`
	c := NewCodec([]byte("key"))
	m, err := c.Parse(multipart("<IDS|MSG>", sign("key", odd, "{}", "{}", "{}"), odd, "{}", "{}", "{}"))
	if err != nil {
		t.Fatal(err)
	}
	reply := c.Format(New(NewSender("u").Header("y"), m.RawHeader, Status{StatusOK}))
	if got := string(reply[3]); got != odd {
		t.Errorf("parent header = %s, want %s", got, odd)
	}
	again, err := NewCodec([]byte("key")).Parse(reply)
	if err != nil {
		t.Fatal(err)
	}
	if got := again.ParentID(); got != "ü" {
		t.Errorf("ParentID() = %q, want %q", got, "ü")
	}
}

func FuzzMessage(f *testing.F) {
	f.Add([]byte("id"), []byte(header), []byte("{}"), []byte("{}"), []byte(`{"code":"1"}`), []byte("buffer"), []byte("00"))
	f.Add([]byte("<IDS|MSG>"), []byte("{"), []byte("{}"), []byte("null"), []byte("[]"), []byte{}, []byte{})
	f.Fuzz(func(t *testing.T, id, header, parent, metadata, content, buffer, signature []byte) {
		right := sign("key", string(header), string(parent), string(metadata), string(content))
		for _, frames := range [][][]byte{
			{id, delimiter, []byte(right), header, parent, metadata, content, buffer},
			{id, delimiter, signature, header, parent, metadata, content, buffer},
			{id, signature, header, parent, metadata, content, buffer},
		} {
			c := NewCodec([]byte("key"))
			m, err := c.Parse(frames)
			if err != nil {
				continue
			}
			if got := c.Format(m); !slices.EqualFunc(got, frames, bytes.Equal) {
				t.Errorf("Format(Parse(x)) = %q, want %q", got, frames)
			}
			at := slices.IndexFunc(frames, func(f []byte) bool { return bytes.Equal(f, delimiter) })
			signed := bytes.Join(frames[at+2:at+6], nil)
			if got, want := string(frames[at+1]), sign("key", string(signed)); got != want {
				t.Errorf("accepted with the signature %q, want only %q", got, want)
			}
		}
	})
}

func BenchmarkRoundTrip(b *testing.B) {
	c := NewCodec([]byte("key"))
	s := NewSender("u")
	b.ReportAllocs()
	for b.Loop() {
		if _, err := c.Parse(c.Format(New(s.Header("status"), json0, ExecutionState{"idle"}))); err != nil {
			b.Fatal(err)
		}
	}
}

var json0 = []byte(header)
