// Command echo binds the sockets that a kernel has, for wire.py: a ROUTER and a
// REP that echo, and an XPUB that sends as many messages as a client asks for.
package main

import (
	"bytes"
	"fmt"
	"log"
	"runtime"
	"strconv"

	"levelsum/kernel/socket"
)

func main() {
	runtime.GOMAXPROCS(max(runtime.NumCPU(), 8)) // as in levelsum serve
	open := func(kind socket.Kind) *socket.Socket {
		s, err := socket.Listen(kind, "tcp://127.0.0.1:0", socket.Options{})
		if err != nil {
			log.Fatal(err)
		}
		fmt.Println(s.Endpoint())
		return s
	}
	shell, beats, iopub := open(socket.Router), open(socket.Rep), open(socket.XPub)
	go func() {
		for {
			m, err := beats.Recv()
			if err != nil {
				log.Fatal(err)
			}
			if err := beats.Send(m); err != nil {
				log.Fatal(err)
			}
		}
	}()
	for {
		m, err := shell.Recv()
		if err != nil {
			log.Fatal(err)
		}
		if n, ok := bytes.CutPrefix(m[1], []byte("publish ")); ok {
			n, _ := strconv.Atoi(string(n))
			size, _ := strconv.Atoi(string(m[2]))
			body := make([]byte, size)
			for range n {
				if err := iopub.Send([][]byte{[]byte("stream"), []byte("<IDS|MSG>"), []byte("signature"), []byte("header"), []byte("parent"), []byte("{}"), body}); err != nil {
					log.Print(err)
				}
			}
			continue
		}
		if err := shell.Send(m); err != nil {
			log.Fatal(err)
		}
	}
}
