// Package socket gives the serving process ZeroMQ sockets that no peer can
// take down: ROUTER, REP, XPUB and PUB, bound to a tcp or an ipc endpoint.
//
// # Division of work
//
// The socket patterns (routing by identity, reply envelopes, topic matching,
// the framing of every message) are those of github.com/go-zeromq/zmq4. The
// network belongs to this package. It is registered with zmq4 as the
// transport "guarded", whose connections are peers:
//
//	network ── Read ──► peer: whole, checked messages ──► zmq4 ──► Socket.Recv
//	network ◄─ writer ─ peer: bounded queue ◄── Write ─── zmq4 ◄── Socket.Send
//
// So zmq4 never sees a byte of a peer that has not been checked, never waits
// for a peer, and never gets an error that it mishandles. One subject a file:
//
//	frame.go      the bytes of a frame, a command and a greeting (ZMTP 3.0)
//	listener.go   binding, accepting, the registry of peers
//	handshake.go  greeting and READY, before zmq4 hears of a connection
//	peer.go       one connection as zmq4 sees it; its end
//	read.go       what a peer sends: limits, commands, subscriptions, credit
//	write.go      what zmq4 writes to a peer, cut into messages
//	outbox.go     the bytes that wait for a peer; slow peers
//	tap.go        how far zmq4 has come with what it was given to publish
//	socket.go     the sockets themselves; close.go their end
//
// # What a peer can expect
//
// The protocol spoken is ZMTP 3.0 with the NULL mechanism
// (https://rfc.zeromq.org/spec/23/), and of ZMTP 3.1 the commands PING,
// SUBSCRIBE and CANCEL (https://rfc.zeromq.org/spec/37/). A peer has ten
// seconds for its handshake. A message may have 1 GB, a subscription 64 KB.
// A peer that breaks a rule is disconnected, and nobody else notices.
//
// A peer that reads slowly holds back Send once 8 MB wait for it, as long as
// it takes some bytes every second and for at most 30 seconds; then it loses
// whole messages, which are counted, until half of its queue has left.
//
// # What is taken for granted of zmq4
//
// Written for v0.17.0, and to be looked at again with every other version: run
// the tests with -race, which notice when one of these no longer holds.
//
//   - addConn enters a connection in the tables for sending before it starts
//     the goroutine that reads it.
//   - Publishing sockets serve their connections in the order in which they
//     came, one message after the other, and call Write themselves.
//   - A reader asks for more only after it has handed over what it got.
//   - The queue of received messages has more places than maxInside.
//   - Close cancels the context before it closes connections and listener.
//
// # What remains
//
//   - A peer that has stalled costs Send one second, once; one that takes a few
//     bytes a second costs it thirty.
//   - Send of a publishing socket tells of a lost message with a later one.
//   - The last reply of a Rep may be lost in Close.
//   - After the last Send a program has to call Close before it exits.
//
// # Locks
//
// In the order in which one goroutine may hold them: Socket.life,
// Socket.sending or peer.sending, the locks of zmq4, tap.mu, outbox.mu. The
// lock listener.mu is never held together with another one. Nothing waits for
// the network while it holds a lock of zmq4 or of a peer's outbox.
//
// # Goroutines
//
// A listener has one for accepting, a peer one that does its handshake and
// then writes; a small reply for which nothing waits is written by whoever sends
// it, as far as the network takes it without a wait. Close waits for all of
// them. Those of zmq4 (one reader for each peer and up to three for the socket)
// end with Close as well.
package socket
