// Package wire holds the messages of the Jupyter messaging protocol, version
// 5.5, as Go types, and turns them into frames and back. It opens no socket
// and starts no goroutine.
//
// A message travels as a list of frames:
//
//	identity ...      zero or more, put there by the ROUTER socket
//	<IDS|MSG>         the delimiter
//	signature         HMAC-SHA256 of the next four frames, lower-case hex
//	header            JSON
//	parent header     JSON, {} if there is none
//	metadata          JSON
//	content           JSON
//	buffer ...        zero or more, not signed
//
// A [Codec] reads and writes this form with the key of one connection.
// [Codec.Parse] keeps the four JSON frames as they came, byte for byte, so
// that a reply can carry the header it answers unchanged; [Codec.Format] signs
// and never changes them. What cannot be accepted is counted by reason
// ([Codec.Dropped]) and returned as a [*DropError]; it is never fatal.
//
// Terms: the header of a request is the parent of every message that is sent
// because of it. A topic is the first frame of a broadcast, which subscribers
// select by. A drop is a message that is not answered because it cannot be
// trusted or read.
//
// Limits. Only the signature scheme hmac-sha256 is spoken. Replays are refused
// among the last 65,536 accepted messages of a connection. The field
// subshell_id of a header is read over: there are no subshells. With an empty
// key nothing is signed, nothing is checked and replays cannot be told.
//
// Reference: the messaging page of the documentation of jupyter_client, and
// the enhancement proposals 65 (subscription message), 91 (subshells) and 92
// (handshake) of the Jupyter project.
package wire

// Version is the version of the protocol that this package speaks.
const Version = "5.5"
