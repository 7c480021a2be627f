package socket

import (
	"encoding/json"
	"errors"
	"fmt"
	"net"
	"os"
	"strconv"
)

// A Connection is what a front end writes into a connection file: where a
// kernel listens and the key that signs its messages.
type Connection struct {
	// Transport is "tcp" or "ipc"; IP is the address, or the path to which
	// ipc adds a hyphen and the port.
	Transport string
	IP        string
	// The ports. With tcp, 0 asks for any free one.
	Shell, Control, Stdin, IOPub, Heartbeat int
	// Key signs messages with HMAC-SHA256; empty means no signing.
	Key string
}

// connectionFile is the file's form.
type connectionFile struct {
	Transport string `json:"transport"`
	IP        string `json:"ip"`
	Shell     *int   `json:"shell_port"`
	Control   *int   `json:"control_port"`
	Stdin     *int   `json:"stdin_port"`
	IOPub     *int   `json:"iopub_port"`
	Heartbeat *int   `json:"hb_port"`
	Key       string `json:"key"`
	Scheme    string `json:"signature_scheme"`

	CurvePublic json.RawMessage `json:"curve_publickey"`
	CurveSecret json.RawMessage `json:"curve_secretkey"`
}

// ErrEncryption is the error for a connection file that asks for encryption.
var ErrEncryption = errors.New("the connection file has curve keys, but this kernel does not encrypt; start it without them")

// ReadConnection reads a connection file. The error names the file and what is
// wrong with it.
func ReadConnection(path string) (Connection, error) {
	b, err := os.ReadFile(path)
	if err != nil {
		return Connection{}, err
	}
	c, err := parseConnection(b)
	if err != nil {
		return Connection{}, fmt.Errorf("%s: %w", path, err)
	}
	return c, nil
}

func parseConnection(b []byte) (Connection, error) {
	var f connectionFile
	if err := json.Unmarshal(b, &f); err != nil {
		return Connection{}, fmt.Errorf("not a connection file: %w", err)
	}
	if given(f.CurvePublic) || given(f.CurveSecret) {
		return Connection{}, ErrEncryption
	}
	c := Connection{Transport: f.Transport, IP: f.IP, Key: f.Key}
	switch {
	case f.Transport != "tcp" && f.Transport != "ipc":
		return Connection{}, fmt.Errorf("transport is %q, want tcp or ipc", f.Transport)
	case f.IP == "":
		return Connection{}, errors.New("ip is missing")
	case f.Key != "" && f.Scheme != "" && f.Scheme != "hmac-sha256":
		return Connection{}, fmt.Errorf("signature_scheme is %q, want hmac-sha256", f.Scheme)
	}
	used := map[int]string{}
	for _, p := range []struct {
		name string
		from *int
		to   *int
	}{
		{"shell_port", f.Shell, &c.Shell},
		{"control_port", f.Control, &c.Control},
		{"stdin_port", f.Stdin, &c.Stdin},
		{"iopub_port", f.IOPub, &c.IOPub},
		{"hb_port", f.Heartbeat, &c.Heartbeat},
	} {
		switch {
		case p.from == nil:
			return Connection{}, fmt.Errorf("%s is missing", p.name)
		case *p.from < 1 || *p.from > 65535:
			return Connection{}, fmt.Errorf("%s is %d, want 1 to 65535", p.name, *p.from)
		case used[*p.from] != "":
			return Connection{}, fmt.Errorf("%s and %s are both %d", used[*p.from], p.name, *p.from)
		}
		used[*p.from] = p.name
		*p.to = *p.from
	}
	return c, nil
}

// given reports whether a field of the file holds something.
func given(field json.RawMessage) bool {
	s := string(field)
	return s != "" && s != "null" && s != `""`
}

// Endpoint names the place of port, as [Listen] takes it.
func (c Connection) Endpoint(port int) string {
	if c.Transport == "ipc" {
		return "ipc://" + c.IP + "-" + strconv.Itoa(port)
	}
	return "tcp://" + net.JoinHostPort(c.IP, strconv.Itoa(port))
}
