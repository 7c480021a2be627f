package compile

import (
	"context"
	"encoding/json"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
)

// kept are the settings of the go command that do not change what it compiles:
// where modules and results are kept, and how modules are fetched.
var kept = []string{
	"GOPATH", "GOMODCACHE", "GOCACHE", "GOTMPDIR",
	"GOPROXY", "GONOPROXY", "GOPRIVATE", "GOSUMDB", "GONOSUMDB", "GOINSECURE", "GOAUTH", "GOVCS",
	"CC",
}

// A toolchain is the installed Go, as it says itself.
type toolchain struct {
	goCmd   string            // its own go command
	version string            // "go1.26.8"
	goroot  string            // where it is installed
	tools   string            // folder of compile and link
	cc      string            // C compiler, needed to link plugins
	plugins bool              // the platform has plugins and the C compiler is there
	env     map[string]string // the settings in kept
}

// find asks the go command on the path what it is. In the folder of a module it
// may be another than elsewhere: the one that the module wants.
func find(ctx context.Context, dir string) (*toolchain, error) {
	path, err := exec.LookPath("go")
	if err != nil {
		return nil, &Unavailable{
			Reason: "there is no Go toolchain on the path",
			Do:     "install " + runtime.Version() + ", make sure that the command go is found, and run levelsum install",
		}
	}
	args := append([]string{"env", "-json", "GOVERSION", "GOROOT", "GOTOOLDIR"}, kept...)
	cmd := exec.CommandContext(ctx, path, args...)
	cmd.Dir = dir
	cmd.Env = append(withoutGo(os.Environ()), "GOWORK=off")
	for _, k := range append(slices.Clone(kept), "GOTOOLCHAIN") {
		if v, ok := os.LookupEnv(k); ok {
			cmd.Env = append(cmd.Env, k+"="+v)
		}
	}
	out, err := cmd.Output()
	if err != nil {
		return nil, &Unavailable{Reason: "the command " + path + " does not work", Do: "install " + runtime.Version(), Err: said(err)}
	}
	env := map[string]string{}
	if err := json.Unmarshal(out, &env); err != nil {
		return nil, &Unavailable{Reason: "the command " + path + " does not answer as Go does", Err: err}
	}
	t := &toolchain{goCmd: filepath.Join(env["GOROOT"], "bin", "go"), version: env["GOVERSION"], goroot: env["GOROOT"], tools: env["GOTOOLDIR"], cc: env["CC"], env: map[string]string{}}
	for _, k := range kept {
		if env[k] != "" {
			t.env[k] = env[k]
		}
	}
	t.plugins = Supported() == nil && findCC(t.cc) == nil
	return t, nil
}

// environ is the environment in which packages are compiled: nothing of the
// user's that could change the result.
func (t *toolchain) environ() []string {
	env := append(withoutGo(os.Environ()), "GOENV=off", "GOTOOLCHAIN=local", "GOWORK=off", "GOFLAGS=", "GOROOT="+t.goroot)
	if t.plugins {
		env = append(env, "CGO_ENABLED=1")
	} else {
		env = append(env, "CGO_ENABLED=0")
	}
	for k, v := range t.env {
		env = append(env, k+"="+v)
	}
	return env
}

// withoutGo takes out the variables that the Go tools and the C compiler obey.
func withoutGo(env []string) []string {
	var out []string
	for _, e := range env {
		k, _, _ := strings.Cut(e, "=")
		switch {
		case strings.HasPrefix(k, "GO") && k != "GOENV", strings.HasPrefix(k, "CGO_"):
		case k == "CC", k == "CXX", k == "CPATH", k == "C_INCLUDE_PATH", k == "LIBRARY_PATH", k == "DEPENDENCIES_OUTPUT", k == "SUNPRO_DEPENDENCIES":
		default:
			out = append(out, e)
		}
	}
	return out
}

// said makes an error of what a command printed on standard error.
func said(err error) error {
	var exit *exec.ExitError
	if errors.As(err, &exit) && len(exit.Stderr) > 0 {
		return errors.New(strings.TrimSpace(string(exit.Stderr)))
	}
	return err
}
