package socket

import (
	"bufio"
	"crypto/rand"
	"fmt"
	"io"
	"net"
	"slices"
	"time"
)

// readBuffer is the size of a peer's input buffer. Larger bodies bypass it.
const readBuffer = 16 << 10

// shake does the handshake on c, ahead of zmq4, and returns the peer. The
// deadline is for all of it, so a connection that sends nothing, or one byte
// a second, goes away. shake does not close c.
//
// zmq4 will do its own handshake with the peer, on bytes that we make: a
// READY that it would choke on never reaches it.
func (l *listener) shake(c net.Conn) (*peer, error) {
	if err := c.SetDeadline(time.Now().Add(l.lim.handshake)); err != nil {
		return nil, err
	}
	if _, err := c.Write(greeting[:]); err != nil {
		return nil, err
	}
	r := bufio.NewReaderSize(c, readBuffer)
	var b [greetingSize]byte
	if _, err := io.ReadFull(r, b[:10]); err != nil {
		return nil, err
	}
	if err := checkSignature(b[:10]); err != nil {
		return nil, err
	}
	if _, err := io.ReadFull(r, b[10:]); err != nil {
		return nil, err
	}
	if err := checkVersion(b[10:]); err != nil {
		return nil, err
	}
	if _, err := c.Write(appendReady(nil, l.kind.String(), "")); err != nil {
		return nil, err
	}
	socketType, id, err := readReady(r)
	if err != nil {
		return nil, err
	}
	if !slices.Contains(l.kind.partners(), socketType) {
		return nil, fmt.Errorf("socket: peer is %.20q: %w", socketType, errReady)
	}
	if id == "" {
		id = newIdentity()
	}
	if err := c.SetDeadline(time.Time{}); err != nil {
		return nil, err
	}
	return newPeer(l, c, r, socketType, id), nil
}

// readReady reads the command READY with which a peer ends its handshake.
func readReady(r *bufio.Reader) (socketType, identity string, err error) {
	flags, size, err := readHeader(r)
	if err != nil {
		return "", "", err
	}
	if flags&flagCommand == 0 {
		return "", "", errReady
	}
	if size > maxCommand {
		return "", "", errTooLong
	}
	body, err := readBody(r, nil, int(size))
	if err != nil {
		return "", "", err
	}
	name, data, err := splitCommand(body)
	if err != nil {
		return "", "", err
	}
	if name != "READY" {
		return "", "", errReady
	}
	socketType, identity, err = splitReady(data)
	if err != nil {
		return "", "", err
	}
	// Identities that begin with a zero byte are those that we make.
	if len(identity) > maxIdentity || identity != "" && identity[0] == 0 {
		return "", "", errReady
	}
	return socketType, identity, nil
}

// newIdentity makes the identity of a peer that sent none, so that our
// registry and the tables of zmq4 agree on it.
func newIdentity() string {
	var b [17]byte
	rand.Read(b[1:]) // never fails
	return string(b[:])
}
