package main

import (
	"context"
	"flag"
	"fmt"
	"io"
	"plugin"
	"runtime"
	"runtime/debug"

	"levelsum/kernel/compile"
	"levelsum/statmech/unit"
)

const versionUsage = `usage: levelsum version

Says which versions this is made of, and whether cells can be compiled here; if
not, why, and what to do about it.
`

// showVersion is "levelsum version".
func showVersion(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	fs := flag.NewFlagSet("version", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, versionUsage) }
	if err := fs.Parse(args); err != nil || fs.NArg() > 0 {
		if err == nil {
			fs.Usage()
		}
		return misuse(err)
	}
	fmt.Fprintf(stdout, "levelsum %s\n", version)
	fmt.Fprintf(stdout, "built with %s for %s/%s\n", runtime.Version(), runtime.GOOS, runtime.GOARCH)
	fmt.Fprintf(stdout, "interpreter: yaegi %s\n", moduleVersion("github.com/traefik/yaegi"))
	fmt.Fprintf(stdout, "physical constants: %s\n", unit.ConstantsSource)
	fmt.Fprintf(stdout, "compiled cells: %s\n", compiledTier(context.Background()))
	return 0
}

// moduleVersion is the version of a module that is linked in.
func moduleVersion(path string) string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown"
	}
	for _, m := range info.Deps {
		if m.Path == path {
			if m.Replace != nil {
				m = m.Replace
			}
			return m.Version
		}
	}
	return "not linked in"
}

// compiledTier says whether cells can be compiled, after trying it.
func compiledTier(ctx context.Context) string {
	k, err := compile.Here()
	if err == nil {
		err = try(ctx, k)
	}
	if err != nil {
		return fmt.Sprintf("do not work: %v", err)
	}
	return fmt.Sprintf("work (%s in %s, %d packages can be imported)", k.Manifest.Go, k.Manifest.GOROOT, len(k.Paths()))
}

// try builds a plugin and opens it.
func try(ctx context.Context, k *compile.Kit) error {
	p, err := k.Probe(ctx)
	if err != nil {
		return err
	}
	_, err = plugin.Open(p.File)
	return compile.Explain(err)
}
