package socket

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

const goodFile = `{"shell_port": 5001, "iopub_port": 5002, "stdin_port": 5003, "control_port": 5004, "hb_port": 5005,
 "ip": "127.0.0.1", "key": "a0436f6c", "transport": "tcp", "signature_scheme": "hmac-sha256", "kernel_name": "x", "jupyter_session": "y"}`

func TestReadConnection(t *testing.T) {
	path := filepath.Join(t.TempDir(), "kernel.json")
	if err := os.WriteFile(path, []byte(goodFile), 0o600); err != nil {
		t.Fatal(err)
	}
	got, err := ReadConnection(path)
	want := Connection{Transport: "tcp", IP: "127.0.0.1", Shell: 5001, IOPub: 5002, Stdin: 5003, Control: 5004, Heartbeat: 5005, Key: "a0436f6c"}
	if err != nil || got != want {
		t.Errorf("ReadConnection = %+v, %v, want %+v", got, err, want)
	}
	if got, want := got.Endpoint(5001), "tcp://127.0.0.1:5001"; got != want {
		t.Errorf("Endpoint = %s, want %s", got, want)
	}
	if got, want := (Connection{Transport: "ipc", IP: "/run/k"}).Endpoint(3), "ipc:///run/k-3"; got != want {
		t.Errorf("Endpoint = %s, want %s", got, want)
	}
	if _, err := ReadConnection(path + "-gone"); err == nil || !strings.Contains(err.Error(), path+"-gone") {
		t.Errorf("a file that is not there: %v, want an error that names it", err)
	}
}

func TestConnectionFileIsRefused(t *testing.T) {
	for _, test := range []struct{ old, new, want string }{
		{goodFile, ``, "not a connection file"},
		{goodFile, `[1]`, "not a connection file"},
		{`"shell_port": 5001`, `"shell_port": "5001"`, "not a connection file"},
		{`"shell_port": 5001, `, ``, "shell_port is missing"},
		{`"hb_port": 5005`, `"hb_port": 0`, "hb_port is 0"},
		{`"hb_port": 5005`, `"hb_port": 70000`, "hb_port is 70000"},
		{`"hb_port": 5005`, `"hb_port": 5004`, "control_port and hb_port are both 5004"},
		{`"ip": "127.0.0.1"`, `"ip": ""`, "ip is missing"},
		{`"transport": "tcp"`, `"transport": "udp"`, `transport is "udp"`},
		{`hmac-sha256`, `hmac-md5`, `signature_scheme is "hmac-md5"`},
		{`"ip"`, `"curve_publickey": "abc", "ip"`, "does not encrypt"},
		{`"ip"`, `"curve_secretkey": "abc", "ip"`, "does not encrypt"},
	} {
		_, err := parseConnection([]byte(strings.Replace(goodFile, test.old, test.new, 1)))
		if err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("with %s for %s: error %v, want %q", test.new, test.old, err, test.want)
		}
	}
	if _, err := parseConnection([]byte(strings.Replace(goodFile, `"ip"`, `"curve_publickey": null, "curve_secretkey": "", "ip"`, 1))); err != nil {
		t.Errorf("empty curve keys: %v, want none", err)
	}
	// No key means no signing, whatever scheme is named.
	if c, err := parseConnection([]byte(strings.Replace(goodFile, `"a0436f6c"`, `""`, 1))); err != nil || c.Key != "" {
		t.Errorf("empty key: %+v, %v", c, err)
	}
}
