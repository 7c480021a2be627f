package compile

import (
	"bytes"
	"crypto/sha256"
	"debug/elf"
	"encoding/binary"
	"encoding/hex"
	"errors"
	"io"
	"os"
	"path/filepath"
	"runtime/debug"
	"strings"
)

// Root is the folder below which levelsum keeps what it builds: LEVELSUM_CACHE,
// else "levelsum" in the user's cache folder.
func Root() (string, error) {
	if dir := os.Getenv("LEVELSUM_CACHE"); dir != "" {
		return filepath.Abs(dir)
	}
	dir, err := os.UserCacheDir()
	if err != nil {
		return "", &Unavailable{Reason: "there is no folder for compiled cells", Do: "name one in LEVELSUM_CACHE", Err: err}
	}
	return filepath.Join(dir, "levelsum"), nil
}

// BuiltDir is the folder of the cache for built code.
func BuiltDir() (string, error) {
	root, err := Root()
	return filepath.Join(root, "built"), err
}

// KitDir is the folder of the kit of an executable. It depends on the build, so
// that each build finds its own kit or none.
func KitDir(executable string) (string, error) {
	root, err := Root()
	if err != nil {
		return "", err
	}
	id, err := BuildID(executable)
	if err != nil {
		return "", err
	}
	return filepath.Join(root, "kit", KitName(id)), nil
}

// KitName is the name of the folder of the kit of a build.
func KitName(buildID string) string {
	sum := sha256.Sum256([]byte(buildID))
	return hex.EncodeToString(sum[:10])
}

// Here opens the kit of the running executable, and makes sure that what it
// builds can be opened. The error is an [*Unavailable] if there is none.
func Here() (*Kit, error) {
	exe, err := os.Executable()
	if err != nil {
		return nil, err
	}
	dir, err := KitDir(exe)
	if err != nil {
		return nil, err
	}
	built, err := BuiltDir()
	if err != nil {
		return nil, err
	}
	k, err := Open(dir, built)
	if err != nil {
		return nil, err
	}
	if err := k.Fits(); err != nil {
		return nil, err
	}
	hold(dir)
	return k, nil
}

// Fits says whether the running program could open what the kit builds, as far
// as that can be told without trying. The error is an [*Unavailable].
func (k *Kit) Fits() error {
	if here := Race; k.Manifest.Race != here {
		return &Unavailable{Reason: "this levelsum and its compiled packages differ in the flag -race", Do: "run levelsum install"}
	}
	return CanOpen()
}

// CanOpen says whether the running program was built so that it could open
// plugins of any kit. The error is an [*Unavailable].
func CanOpen() error {
	if err := Supported(); err != nil {
		return err
	}
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return nil
	}
	trimmed := false
	for _, s := range info.Settings {
		switch {
		case s.Key == "-trimpath":
			trimmed = s.Value == "true"
		case s.Key == "-cover" && s.Value == "true":
			return &Unavailable{Reason: "this levelsum was built with -cover", Do: "build it without"}
		case s.Key == "CGO_ENABLED" && s.Value == "0":
			return &Unavailable{Reason: "this levelsum was built without cgo", Do: "install gcc and run install.sh again"}
		}
	}
	if !trimmed {
		return &Unavailable{Reason: "this levelsum was built without -trimpath", Do: "run install.sh, or build it with go build -trimpath"}
	}
	return nil
}

// Explain turns an error of plugin.Open into an [*Unavailable] if the plugin
// and the running program do not fit; other errors it returns as they are.
func Explain(err error) error {
	if err == nil || !strings.Contains(err.Error(), "different version of package") {
		return err
	}
	return &Unavailable{Reason: "the compiled packages were made from another source than this levelsum", Do: "run levelsum install", Err: err}
}

// BuildID returns what identifies the build of a Go executable: the build ID
// that the go command puts into it, or a hash of the file if it has none.
func BuildID(file string) (string, error) {
	f, err := os.Open(file)
	if err != nil {
		return "", err
	}
	defer f.Close()
	if id := noteID(f); id != "" {
		return id, nil
	}
	// Where there is no ELF, the ID stands at the start of the text.
	head := make([]byte, 64<<10)
	n, err := io.ReadFull(f, head)
	if err != nil && !errors.Is(err, io.ErrUnexpectedEOF) {
		return "", err
	}
	if _, rest, ok := bytes.Cut(head[:n], []byte("\xff Go build ID: \"")); ok {
		if id, _, ok := bytes.Cut(rest, []byte("\"\n \xff")); ok && len(id) > 0 {
			return string(id), nil
		}
	}
	if _, err := f.Seek(0, io.SeekStart); err != nil {
		return "", err
	}
	h := sha256.New()
	if _, err := io.Copy(h, f); err != nil {
		return "", err
	}
	return hex.EncodeToString(h.Sum(nil)), nil
}

// noteID reads Go's note in an ELF file.
func noteID(r io.ReaderAt) string {
	f, err := elf.NewFile(r)
	if err != nil {
		return ""
	}
	s := f.Section(".note.go.buildid")
	if s == nil {
		return ""
	}
	data, err := s.Data()
	// size of name, size of description, type; "Go\0\0"; description.
	if err != nil || len(data) < 16 {
		return ""
	}
	n := binary.NativeEndian.Uint32(data[4:])
	if string(data[12:16]) != "Go\x00\x00" || int(n) > len(data)-16 {
		return ""
	}
	return string(data[16 : 16+n])
}
