package session

import (
	"runtime"
	"strings"

	"levelsum/kernel/wire"
)

// kernelInfo says what this kernel is.
func (s *Session) kernelInfo(r *request) {
	goVersion := strings.TrimPrefix(runtime.Version(), "go")
	r.reply("kernel_info_reply", wire.KernelInfoReply{
		Status:                wire.StatusOK,
		ProtocolVersion:       wire.Version,
		Implementation:        "levelsum",
		ImplementationVersion: s.version,
		LanguageInfo: wire.LanguageInfo{
			Name:           "go",
			Version:        goVersion,
			MimeType:       "text/x-go",
			FileExtension:  ".go",
			PygmentsLexer:  "go",
			CodeMirrorMode: "go",
		},
		Banner: "Levelsum " + s.version + ": statistical thermodynamics in Go " + goVersion,
		HelpLinks: []wire.HelpLink{
			{Text: "The Go language", URL: "https://go.dev/ref/spec"},
			{Text: "Go's standard library", URL: "https://pkg.go.dev/std"},
			{Text: "Gonum: numbers, matrices, statistics", URL: "https://pkg.go.dev/gonum.org/v1/gonum"},
			{Text: "Fundamental constants (CODATA)", URL: "https://physics.nist.gov/cuu/Constants/"},
			{Text: "Uncertainty of measurement (JCGM guides)", URL: "https://www.bipm.org/en/committees/jc/jcgm/publications"},
		},
		SupportedFeatures: []string{},
	})
}
