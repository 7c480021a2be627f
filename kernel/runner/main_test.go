package runner_test

import (
	"context"
	"fmt"
	"os"
	"strings"
	"sync"
	"testing"

	"levelsum/display"
	"levelsum/kernel/compile/kittest"
	"levelsum/kernel/engine"
)

// host is a real levelsum with its kit, built once for all tests.
var host *kittest.Host

func TestMain(m *testing.M) {
	dir, err := os.MkdirTemp("", "levelsum-runner-")
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
	host, err = kittest.Make(context.Background(), dir, "./kernel/levelsum", false, nativePath)
	code := 1
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
	} else {
		code = m.Run()
	}
	os.RemoveAll(dir)
	os.Exit(code)
}

// start starts an engine of the real levelsum.
func start(t testing.TB, env ...string) *engine.Engine {
	t.Helper()
	e, err := engine.Start(t.Context(), engine.Options{
		Command: []string{host.Exe, "engine"}, Dir: t.TempDir(), Env: append([]string{"LEVELSUM_CACHE=" + host.Cache}, env...),
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { e.Close() })
	return e
}

// A capture keeps what a cell shows.
type capture struct {
	mu             sync.Mutex
	stdout, stderr strings.Builder
	shown          []display.View
	all            []string // everything in order, a word each
	answer         func(prompt string) (string, error)
}

func (c *capture) Stream(name, text string) {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.all = append(c.all, name+":"+text)
	if name == "stdout" {
		c.stdout.WriteString(text)
		return
	}
	c.stderr.WriteString(text)
}

func (c *capture) Show(v display.View, id string, replace bool) {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.all = append(c.all, fmt.Sprintf("show:%v", v.Data["text/plain"]))
	c.shown = append(c.shown, v)
}

func (c *capture) Clear(bool) {}

func (c *capture) Ask(prompt string, _ bool) (string, error) {
	if c.answer == nil {
		return "", fmt.Errorf("nobody answers")
	}
	return c.answer(prompt)
}

func (c *capture) out() string {
	c.mu.Lock()
	defer c.mu.Unlock()
	return c.stdout.String()
}

func (c *capture) err() string {
	c.mu.Lock()
	defer c.mu.Unlock()
	return c.stderr.String()
}

// run runs one cell.
func run(t testing.TB, e *engine.Engine, n int, src string) (engine.Outcome, *capture) {
	t.Helper()
	c := &capture{}
	return e.Run(t.Context(), engine.Cell{N: n, Source: src}, c), c
}
