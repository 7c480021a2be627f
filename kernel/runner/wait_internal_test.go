package runner

import (
	"strings"
	"testing"
)

// What the stacks of a cell that waits look like, with what it is called from.
func stacksOf(top string) string {
	return "goroutine 1 [chan receive]:\nmain.main()\n\t/main.go:1\n\n" +
		"goroutine 9 [chan receive]:\n" + top + "cell/k0.run()\n\tcell/In[5]:1 +0x1\n" +
		"levelsum/kernel/runner.(*Runner).goroutine.func1()\n\t/run.go:1\n"
}

func TestWhoWaitsForTheReaderIsNotBlocked(t *testing.T) {
	text, blocked := hintOf(stacksOf(""))
	if !blocked || !strings.Contains(text, "the cell waits at In[5]:1 (chan receive)") {
		t.Errorf("%q, %v: want a word about In[5]:1", text, blocked)
	}
	for _, top := range []string{
		"levelsum/kernel/runner.(*Runner).send(0x1)\n\t/runner.go:1\nlevelsum/kernel/runner.sink.Show()\n\t/sink.go:1\n",
		"levelsum/kernel/runner.sink.Ask(0x1)\n\t/sink.go:1\n",
	} {
		if text, blocked := hintOf(stacksOf(top)); blocked {
			t.Errorf("blocked: %q", text)
		}
	}
}
