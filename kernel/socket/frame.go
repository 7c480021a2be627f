package socket

import (
	"bufio"
	"bytes"
	"encoding/binary"
	"errors"
	"io"
	"slices"
	"strings"
)

// Flags of a frame, ZMTP 3.0: "flags" in the formal grammar.
const (
	flagMore    = 1
	flagLong    = 2
	flagCommand = 4
	flagsKnown  = flagMore | flagLong | flagCommand
)

const (
	greetingSize = 64
	maxCommand   = 64 << 10 // bytes of a command, READY among them
	maxIdentity  = 255
	growStep     = 1 << 20 // how far a buffer grows ahead of what has arrived
)

var (
	errFrame    = errors.New("socket: bad frame")
	errCommand  = errors.New("socket: bad command")
	errTooLong  = errors.New("socket: frame or message too long")
	errGreeting = errors.New("socket: bad greeting")
	errReady    = errors.New("socket: bad READY")
)

// greeting is what a side sends first: signature, version 3.0, mechanism NULL,
// as-server 0, filler.
var greeting = func() (g [greetingSize]byte) {
	g[0], g[9], g[10] = 0xff, 0x7f, 3
	copy(g[12:32], "NULL")
	return g
}()

// checkSignature checks the first ten bytes of a greeting.
func checkSignature(b []byte) error {
	if b[0] != 0xff || b[9]&1 == 0 {
		return errGreeting
	}
	return nil
}

// checkVersion checks what follows the signature: a major version from 3 on
// and the mechanism NULL, filled up with zeros.
func checkVersion(b []byte) error {
	if b[0] < 3 || !bytes.Equal(b[2:22], greeting[12:32]) {
		return errGreeting
	}
	return nil
}

// readHeader reads flags and length of a frame. The length is not checked
// against a limit.
func readHeader(r *bufio.Reader) (flags byte, size uint64, err error) {
	flags, err = r.ReadByte()
	if err != nil {
		return 0, 0, err
	}
	if flags&^flagsKnown != 0 || flags&flagCommand != 0 && flags&flagMore != 0 {
		return 0, 0, errFrame
	}
	if flags&flagLong == 0 {
		n, err := r.ReadByte()
		return flags, uint64(n), err
	}
	var b [8]byte
	_, err = io.ReadFull(r, b[:])
	return flags, binary.BigEndian.Uint64(b[:]), err
}

// readBody appends n bytes from r to b. The memory follows what has arrived:
// it is at most doubled, or a megabyte ahead, so that a length costs nothing.
func readBody(r *bufio.Reader, b []byte, n int) ([]byte, error) {
	for n > 0 {
		k := min(n, max(len(b), growStep))
		b = slices.Grow(b, k)
		m, err := io.ReadFull(r, b[len(b):len(b)+k])
		b = b[:len(b)+m]
		if err != nil {
			return b, err
		}
		n -= k
	}
	return b, nil
}

// appendHeader appends flags and length of a frame, in the short form where
// it is possible.
func appendHeader(b []byte, flags byte, size int) []byte {
	if size <= 255 {
		return append(b, flags&^flagLong, byte(size))
	}
	return binary.BigEndian.AppendUint64(append(b, flags|flagLong), uint64(size))
}

// headerSize returns the size of the header of a frame with this body.
func headerSize(body int) int {
	if body <= 255 {
		return 2
	}
	return 9
}

// wireSize returns how many bytes a message has on the network.
func wireSize(frames [][]byte) int {
	n := 0
	for _, f := range frames {
		n += headerSize(len(f)) + len(f)
	}
	return n
}

// appendCommand appends a command frame.
func appendCommand(b []byte, name string, data []byte) []byte {
	b = appendHeader(b, flagCommand, 1+len(name)+len(data))
	b = append(b, byte(len(name)))
	b = append(b, name...)
	return append(b, data...)
}

// splitCommand returns name and data of a command frame's body.
func splitCommand(body []byte) (name string, data []byte, err error) {
	if len(body) == 0 || body[0] == 0 || int(body[0]) > len(body)-1 {
		return "", nil, errCommand
	}
	n := 1 + int(body[0])
	return string(body[1:n]), body[n:], nil
}

// appendReady appends the command READY.
func appendReady(b []byte, socketType, identity string) []byte {
	var data []byte
	for _, p := range [...][2]string{{"Socket-Type", socketType}, {"Identity", identity}} {
		data = append(data, byte(len(p[0])))
		data = append(data, p[0]...)
		data = binary.BigEndian.AppendUint32(data, uint32(len(p[1])))
		data = append(data, p[1]...)
	}
	return appendCommand(b, "READY", data)
}

// splitReady returns what counts in the properties of a READY. Their names
// are compared without regard to case, as the protocol says.
func splitReady(data []byte) (socketType, identity string, err error) {
	for len(data) > 0 {
		n := int(data[0])
		data = data[1:]
		if n == 0 || n+4 > len(data) {
			return "", "", errReady
		}
		name := string(data[:n])
		size := binary.BigEndian.Uint32(data[n:])
		data = data[n+4:]
		if uint64(size) > uint64(len(data)) {
			return "", "", errReady
		}
		value := string(data[:size])
		data = data[size:]
		switch {
		case strings.EqualFold(name, "Socket-Type"):
			socketType = value
		case strings.EqualFold(name, "Identity"):
			identity = value
		}
	}
	return socketType, identity, nil
}
