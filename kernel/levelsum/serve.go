package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"log"
	"os"
	"os/signal"
	"path/filepath"
	"runtime"
	"strings"
	"syscall"

	"levelsum/kernel/engine"
	"levelsum/kernel/session"
	"levelsum/kernel/socket"
)

const serveUsage = `usage: levelsum serve [-memory SIZE] CONNECTION-FILE

Answers the front end that wrote the connection file until it is told to stop,
gets SIGTERM, or the process that started it is gone. Relative paths in cells
mean the notebook's folder.

  -memory SIZE
        End a cell whose engine takes more (512MB, 4GB); by default three
        quarters of what there is.

The exit status is 0 on success, 1 if something failed, 2 on misuse.
`

// atLeastProcs keeps the heartbeat and interrupts in time while cells of this
// process's child and the session compute: with fewer, the median heartbeat
// took 30 ms on two cores instead of 0.2 ms.
const atLeastProcs = 8

// starter starts the engine of a served kernel.
type starter func(context.Context, engine.Options) (session.Engine, error)

func startEngine(ctx context.Context, o engine.Options) (session.Engine, error) {
	return engine.Start(ctx, o)
}

// serve is "levelsum serve CONNECTION-FILE": it answers a front end until it is
// told to stop, a signal comes, or the process that started it is gone.
func serve(args []string, _ io.Reader, _, stderr io.Writer) int {
	return serveWith(args, stderr, startEngine)
}

func serveWith(args []string, stderr io.Writer, start starter) int {
	say := log.New(stderr, "levelsum: ", 0)
	fs := flag.NewFlagSet("serve", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, serveUsage) }
	o := engine.Options{Dir: notebookFolder()}
	fs.Func("memory", "", func(s string) (err error) { o.MemoryLimit, err = parseSize(s); return err })
	if err := fs.Parse(args); err != nil || fs.NArg() != 1 {
		if err == nil {
			fs.Usage()
		}
		return misuse(err)
	}
	file := fs.Arg(0)
	connection, err := socket.ReadConnection(file)
	if err != nil {
		say.Printf("serve: %v", err)
		return 2
	}
	runtime.GOMAXPROCS(max(runtime.NumCPU(), atLeastProcs))
	if err := serveConnection(file, connection, say, func(ctx context.Context) (session.Engine, error) { return start(ctx, o) }); err != nil {
		say.Printf("serve: %v", err)
		return 1
	}
	return 0
}

func serveConnection(file string, connection socket.Connection, say *log.Logger, start func(context.Context) (session.Engine, error)) (err error) {
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()

	journal, err := session.OpenJournal(journalPath(file))
	if err != nil {
		say.Printf("serve: the journal of cells is kept in memory only: %v", err)
		journal = session.NewJournal()
	}
	defer func() { err = errors.Join(err, journal.Close()) }()

	s, err := session.Open(session.Options{
		Connection: connection,
		Start:      start,
		Version:    version,
		Journal:    journal,
		Log:        say,
	})
	if err != nil {
		return err
	}
	defer onSignals(s)()
	if parent := parentPID(); parent > 0 {
		go watchParent(ctx, parent, s.Stop)
	}
	restart, err := s.Serve(ctx)
	if restart {
		journal.Keep()
	}
	return err
}

// onSignals lets the signals that front ends and terminals send do what they
// mean. The result undoes it.
func onSignals(s *session.Session) (undo func()) {
	signals := make(chan os.Signal, 8)
	// SIGPIPE is caught so that a log whose reader is gone does not end us.
	signal.Notify(signals, os.Interrupt, syscall.SIGTERM, syscall.SIGHUP, syscall.SIGPIPE)
	done := make(chan struct{})
	go func() {
		defer close(done)
		for sig := range signals {
			switch sig {
			case os.Interrupt:
				s.Interrupt()
			case syscall.SIGTERM, syscall.SIGHUP:
				s.Stop()
			}
		}
	}()
	return func() {
		signal.Stop(signals)
		close(signals)
		<-done
	}
}

// journalPath is where the journal of the kernel of a connection file is kept:
// beside it, so that a kernel started again with the file finds it.
func journalPath(connection string) string {
	return strings.TrimSuffix(connection, ".json") + ".journal"
}

// notebookFolder is what relative paths in cells start from: the folder of the
// notebook if the front end names it, else the working folder.
func notebookFolder() string {
	if name := os.Getenv("JPY_SESSION_NAME"); filepath.IsAbs(name) {
		folder := filepath.Dir(name)
		if info, err := os.Stat(folder); err == nil && info.IsDir() {
			return folder
		}
	}
	folder, err := os.Getwd()
	if err != nil {
		return "."
	}
	return folder
}
