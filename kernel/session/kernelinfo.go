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
		Banner:            "Levelsum " + s.version + ": statistical thermodynamics in Go " + goVersion,
		HelpLinks:         []wire.HelpLink{{Text: "The Go language", URL: "https://go.dev/ref/spec"}},
		SupportedFeatures: []string{},
	})
}
