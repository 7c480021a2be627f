// Package kittest builds, for tests, programs that open plugins, with the kit
// that fits them. Tests never open plugins themselves: a test binary is built
// otherwise than the programs that users run.
package kittest

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"

	"levelsum/kernel/compile"
)

// A Host is a program of this module, with its kit.
type Host struct {
	Exe   string
	Cache string // the value of LEVELSUM_CACHE with which it finds its kit
	Kit   *compile.Kit
}

// Make builds the program whose package is pkg ("./kernel/levelsum", relative
// to the module) in the folder dir, and prepares its kit there. With the build
// cache warm it takes about a second, more if the program has to be linked.
func Make(ctx context.Context, dir, pkg string, race bool, offer ...string) (*Host, error) {
	exe, err := Build(ctx, dir, pkg, race)
	if err != nil {
		return nil, err
	}
	root, err := Root(ctx)
	if err != nil {
		return nil, err
	}
	id, err := compile.BuildID(exe)
	if err != nil {
		return nil, err
	}
	h := &Host{Exe: exe, Cache: filepath.Join(dir, "cache")}
	h.Kit, err = compile.Prepare(ctx, filepath.Join(h.Cache, "kit", compile.KitName(id)), root, compile.Options{Race: race, Cache: filepath.Join(h.Cache, "built"), Offer: offer})
	return h, err
}

// Build builds a program of this module in the folder dir, as Make does, and
// returns its path.
func Build(ctx context.Context, dir, pkg string, race bool) (exe string, err error) {
	root, err := Root(ctx)
	if err != nil {
		return "", err
	}
	exe = filepath.Join(dir, filepath.Base(pkg))
	args := []string{"build", "-trimpath", "-o", exe}
	if race {
		args = append(args, "-race")
	}
	cmd := exec.CommandContext(ctx, "go", append(args, pkg)...)
	cmd.Dir = root
	if out, err := cmd.CombinedOutput(); err != nil {
		return "", fmt.Errorf("go build %s: %v\n%s", pkg, err, out)
	}
	return exe, nil
}

// Env is the environment in which to run the program.
func (h *Host) Env() []string { return append(os.Environ(), "LEVELSUM_CACHE="+h.Cache) }

// Root returns the folder of the module under test.
func Root(ctx context.Context) (string, error) {
	out, err := exec.CommandContext(ctx, "go", "env", "GOMOD").Output()
	if err != nil {
		return "", err
	}
	return filepath.Dir(strings.TrimSpace(string(out))), nil
}
