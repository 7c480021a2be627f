package wire

// The values of the field status of a reply.
const (
	StatusOK      = "ok"
	StatusError   = "error"
	StatusAborted = "aborted"
)

// Status answers a request that needs no other answer.
type Status struct {
	Status string `json:"status"`
}

// Failure answers a request that could not be done; without the status it is
// the content of a message of type error.
type Failure struct {
	Status    string   `json:"status,omitempty"`
	Name      string   `json:"ename"`
	Value     string   `json:"evalue"`
	Traceback []string `json:"traceback"`
}

// KernelInfoReply says what the kernel is.
type KernelInfoReply struct {
	Status                string       `json:"status"`
	ProtocolVersion       string       `json:"protocol_version"`
	Implementation        string       `json:"implementation"`
	ImplementationVersion string       `json:"implementation_version"`
	LanguageInfo          LanguageInfo `json:"language_info"`
	Banner                string       `json:"banner"`
	HelpLinks             []HelpLink   `json:"help_links"`
	Debugger              bool         `json:"debugger"`
	SupportedFeatures     []string     `json:"supported_features"`
}

// LanguageInfo says what the language of the cells is. It travels into the
// metadata of notebooks.
type LanguageInfo struct {
	Name           string `json:"name"`
	Version        string `json:"version"`
	MimeType       string `json:"mimetype"`
	FileExtension  string `json:"file_extension"`
	PygmentsLexer  string `json:"pygments_lexer"`
	CodeMirrorMode string `json:"codemirror_mode"`
}

// A HelpLink is an entry of the front end's help menu.
type HelpLink struct {
	Text string `json:"text"`
	URL  string `json:"url"`
}

// ExecuteReply says how a cell ended well.
type ExecuteReply struct {
	Status          string         `json:"status"`
	ExecutionCount  int            `json:"execution_count"`
	UserExpressions map[string]any `json:"user_expressions"`
	Payload         []any          `json:"payload"`
}

// ExecuteFailure says how a cell ended badly.
type ExecuteFailure struct {
	Failure
	ExecutionCount  int            `json:"execution_count"`
	UserExpressions map[string]any `json:"user_expressions"`
	Payload         []any          `json:"payload"`
}

// CompleteReply lists ways to replace what stands from CursorStart to
// CursorEnd, in code points.
type CompleteReply struct {
	Status      string         `json:"status"`
	Matches     []string       `json:"matches"`
	CursorStart int            `json:"cursor_start"`
	CursorEnd   int            `json:"cursor_end"`
	Metadata    map[string]any `json:"metadata"`
}

// InspectReply describes what stands at a cursor.
type InspectReply struct {
	Status   string         `json:"status"`
	Found    bool           `json:"found"`
	Data     map[string]any `json:"data"`
	Metadata map[string]any `json:"metadata"`
}

// IsCompleteReply says whether code can be run: "complete", "incomplete",
// "invalid" or "unknown". Indent is what the next line should begin with.
type IsCompleteReply struct {
	Status string `json:"status"`
	Indent string `json:"indent"`
}

// HistoryReply lists earlier input: each entry is session, number and source,
// or session, number and the pair of source and output.
type HistoryReply struct {
	Status  string   `json:"status"`
	History [][3]any `json:"history"`
}

// CommInfoReply lists the open channels.
type CommInfoReply struct {
	Status string         `json:"status"`
	Comms  map[string]any `json:"comms"`
}

// ShutdownReply says that the kernel ends.
type ShutdownReply struct {
	Status  string `json:"status"`
	Restart bool   `json:"restart"`
}
