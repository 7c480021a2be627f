package main

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"image"
	"image/png"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"

	"levelsum/kernel/compile"
	"levelsum/kernel/compile/kittest"
)

// A user is someone with a home folder of his own and a real levelsum in it.
type user struct {
	t    *testing.T
	home string
	exe  string
	env  []string
}

func newUser(t *testing.T) *user {
	t.Helper()
	u := &user{t: t, home: t.TempDir()}
	exe, err := kittest.Build(t.Context(), u.home, "./kernel/levelsum", compile.Race)
	if err != nil {
		t.Fatal(err)
	}
	u.exe = exe
	for _, e := range os.Environ() {
		k, _, _ := strings.Cut(e, "=")
		if !slices.Contains([]string{"HOME", "XDG_DATA_HOME", "XDG_CACHE_HOME", "JUPYTER_DATA_DIR", "VIRTUAL_ENV", "LEVELSUM_CACHE"}, k) {
			u.env = append(u.env, e)
		}
	}
	u.env = append(u.env, "HOME="+u.home)
	// Go's own folders stay where they are, or all would be compiled again.
	for _, k := range []string{"GOCACHE", "GOMODCACHE", "GOPATH"} {
		v, err := exec.CommandContext(t.Context(), "go", "env", k).Output()
		if err != nil {
			t.Fatal(err)
		}
		u.env = append(u.env, k+"="+strings.TrimSpace(string(v)))
	}
	return u
}

// levelsum runs a command in the user's home.
func (u *user) levelsum(env []string, args ...string) (stdout, stderr string, status int) {
	u.t.Helper()
	cmd := exec.CommandContext(u.t.Context(), u.exe, args...)
	cmd.Dir = u.home
	cmd.Env = append(slices.Clone(u.env), env...)
	var o, e bytes.Buffer
	cmd.Stdout, cmd.Stderr = &o, &e
	err := cmd.Run()
	if _, exit := err.(*exec.ExitError); err != nil && !exit {
		u.t.Fatal(err)
	}
	return o.String(), e.String(), cmd.ProcessState.ExitCode()
}

func TestInstallVersionRemove(t *testing.T) {
	u := newUser(t)
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	wants := func(step, got string, want ...string) {
		t.Helper()
		for _, w := range want {
			if !strings.Contains(got, w) {
				t.Errorf("%s: got %q, which lacks %q", step, got, w)
			}
		}
	}
	stdout, _, status := u.levelsum(nil, "version")
	wants("version before", stdout, "levelsum "+version+"\n", "built with "+runtime.Version(), "interpreter: yaegi v0.16.1\n", "physical constants: CODATA 2022\n",
		"compiled cells: do not work: cells cannot be compiled yet: nothing has been prepared for this levelsum; run levelsum install\n")
	if status != 0 {
		t.Errorf("version: status %d", status)
	}

	stdout, stderr, status := u.levelsum(nil, "install")
	wants("install without source", stderr, "levelsum's source is not found; name its folder with -source")
	wants("install without source", stdout, "registered the kernel in ")
	if status != 1 {
		t.Errorf("install without source: status %d, want 1", status)
	}
	_, stderr, status = u.levelsum(nil, "install", "-source", u.home)
	wants("install from nothing", stderr, "is not the folder of levelsum's source")
	if status != 1 {
		t.Errorf("install from nothing: status %d, want 1", status)
	}

	stdout, stderr, status = u.levelsum(nil, "install", "-source", root)
	wants("install", stdout, "compiled what cells may import: ")
	if status != 0 {
		t.Fatalf("install: status %d\n%s", status, stderr)
	}
	spec := filepath.Join(u.home, ".local", "share", "jupyter", "kernels", "levelsum", "kernel.json")
	if runtime.GOOS == "darwin" {
		spec = filepath.Join(u.home, "Library", "Jupyter", "kernels", "levelsum", "kernel.json")
	}
	before, err := os.ReadFile(spec)
	if err != nil {
		t.Fatal(err)
	}
	var got map[string]any
	if err := json.Unmarshal(before, &got); err != nil {
		t.Fatal(err)
	}
	argv, _ := json.Marshal(got["argv"])
	if want, _ := json.Marshal([]string{u.exe, "serve", "{connection_file}"}); !bytes.Equal(argv, want) {
		t.Errorf("argv is %s, want %s", argv, want)
	}
	if got["language"] != "go" || got["interrupt_mode"] != "message" || got["display_name"] != "Levelsum (Go)" {
		t.Errorf("the kernelspec says %v", got)
	}
	for name, width := range map[string]int{"logo-32x32.png": 32, "logo-64x64.png": 64} {
		data, err := os.ReadFile(filepath.Join(filepath.Dir(spec), name))
		if err != nil {
			t.Fatal(err)
		}
		img, err := png.Decode(bytes.NewReader(data))
		if err != nil || img.Bounds() != image.Rect(0, 0, width, width) {
			t.Errorf("%s is no PNG picture of %d × %d: %v", name, width, width, err)
		}
	}
	if data, err := os.ReadFile(filepath.Join(filepath.Dir(spec), "logo-svg.svg")); err != nil || xml.Unmarshal(data, new(any)) != nil {
		t.Errorf("logo-svg.svg is not well-formed: %v", err)
	}
	stdout, _, _ = u.levelsum(nil, "version")
	wants("version after", stdout, "compiled cells: work ("+runtime.Version()+" in ")

	stdout, stderr, status = u.levelsum(nil, "install")
	wants("second install", stdout, "is registered in ", " already\n", "is compiled already: ")
	if status != 0 || stderr != "" {
		t.Errorf("second install: status %d, %q", status, stderr)
	}
	if after, err := os.ReadFile(spec); err != nil || !bytes.Equal(before, after) {
		t.Errorf("second install changed the kernelspec: %s, %v", after, err)
	}

	// A compiler that is gone is told, with what to do.
	stdout, _, _ = u.levelsum([]string{"PATH=/nowhere"}, "version")
	wants("version without gcc", stdout, "compiled cells: do not work: the C compiler ", "is not found; install ")

	stdout, _, status = u.levelsum(nil, "remove")
	wants("remove", stdout, "removed the kernel's registration: ", "removed the packages compiled for cells: ", "removed the cells compiled so far: ")
	if status != 0 {
		t.Errorf("remove: status %d", status)
	}
	cache := ".cache"
	if runtime.GOOS == "darwin" {
		cache = filepath.Join("Library", "Caches")
	}
	for _, gone := range []string{filepath.Dir(spec), filepath.Join(u.home, cache, "levelsum")} {
		if _, err := os.Stat(gone); !os.IsNotExist(err) {
			t.Errorf("remove left %s: %v", gone, err)
		}
	}
	if stdout, _, _ = u.levelsum(nil, "remove"); stdout != "there is nothing to remove\n" {
		t.Errorf("second remove: %q", stdout)
	}
}

func TestSpecFolder(t *testing.T) {
	plain := filepath.Join("/home/u", ".local", "share", "jupyter")
	xdg := "/x/data/jupyter"
	if runtime.GOOS == "darwin" {
		plain = "/home/u/Library/Jupyter"
		xdg = plain
	}
	for _, test := range []struct {
		name, prefix string
		env          map[string]string
		want         string
	}{
		{"plain", "", nil, plain},
		{"XDG_DATA_HOME", "", map[string]string{"XDG_DATA_HOME": "/x/data"}, xdg},
		{"virtual environment", "", map[string]string{"XDG_DATA_HOME": "/x/data", "VIRTUAL_ENV": "/v"}, "/v/share/jupyter"},
		{"JUPYTER_DATA_DIR", "", map[string]string{"JUPYTER_DATA_DIR": "/j", "VIRTUAL_ENV": "/v"}, "/j"},
		{"prefix", "/p", map[string]string{"JUPYTER_DATA_DIR": "/j", "VIRTUAL_ENV": "/v"}, "/p/share/jupyter"},
	} {
		t.Run(test.name, func(t *testing.T) {
			t.Setenv("HOME", "/home/u")
			for _, k := range []string{"XDG_DATA_HOME", "VIRTUAL_ENV", "JUPYTER_DATA_DIR"} {
				t.Setenv(k, test.env[k])
			}
			got, err := specFolder(test.prefix)
			if want := filepath.Join(test.want, "kernels", "levelsum"); err != nil || got != want {
				t.Errorf("got %s, %v; want %s", got, err, want)
			}
		})
	}
}

// A folder of our name that is not ours is left alone.
func TestUnregisterKeepsForeignKernel(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "kernel.json")
	if err := os.WriteFile(file, []byte(`{"argv": ["other", "{connection_file}"]}`), 0o666); err != nil {
		t.Fatal(err)
	}
	if removed, err := unregister(dir); removed || err == nil {
		t.Errorf("unregister says %t, %v", removed, err)
	}
	if _, err := os.Stat(file); err != nil {
		t.Error(err)
	}
}

func TestMisuse(t *testing.T) {
	for name, c := range map[string]command{"install": install, "remove": remove, "version": showVersion} {
		var o, e bytes.Buffer
		if status := c([]string{"-no-such-flag"}, nil, &o, &e); status != 2 || o.Len() > 0 || !strings.Contains(e.String(), "usage: levelsum "+name) {
			t.Errorf("%s -no-such-flag: status %d, %q, %q", name, status, &o, &e)
		}
		o.Reset()
		e.Reset()
		if status := c([]string{"extra"}, nil, &o, &e); status != 2 || !strings.Contains(e.String(), "usage: levelsum "+name) {
			t.Errorf("%s extra: status %d, %q", name, status, &e)
		}
	}
}
