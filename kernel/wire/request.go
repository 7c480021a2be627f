package wire

import "encoding/json"

// ExecuteRequest asks to run code. The zero value is not what a missing field
// means: see [NewExecuteRequest].
type ExecuteRequest struct {
	Code            string            `json:"code"`
	Silent          bool              `json:"silent"`
	StoreHistory    bool              `json:"store_history"`
	UserExpressions map[string]string `json:"user_expressions"`
	AllowStdin      bool              `json:"allow_stdin"`
	StopOnError     bool              `json:"stop_on_error"`
}

// NewExecuteRequest returns the request that an empty content stands for.
// Permission to ask for input has to be given.
func NewExecuteRequest() ExecuteRequest {
	return ExecuteRequest{StoreHistory: true, StopOnError: true}
}

// CompleteRequest asks how code can go on at the cursor. CursorPos counts code
// points; nil is the end.
type CompleteRequest struct {
	Code      string `json:"code"`
	CursorPos *int   `json:"cursor_pos"`
}

// InspectRequest asks what stands at the cursor. CursorPos counts code points;
// nil is the end.
type InspectRequest struct {
	Code        string `json:"code"`
	CursorPos   *int   `json:"cursor_pos"`
	DetailLevel int    `json:"detail_level"`
}

// IsCompleteRequest asks whether code can be run as it is.
type IsCompleteRequest struct {
	Code string `json:"code"`
}

// HistoryRequest asks for earlier input. Access is "range", "tail" or
// "search".
type HistoryRequest struct {
	Output  bool   `json:"output"`
	Raw     bool   `json:"raw"`
	Access  string `json:"hist_access_type"`
	Session int    `json:"session"`
	Start   int    `json:"start"`
	Stop    *int   `json:"stop"`
	N       *int   `json:"n"`
	Pattern string `json:"pattern"`
	Unique  bool   `json:"unique"`
}

// ShutdownRequest asks the kernel to end; with Restart, another follows.
type ShutdownRequest struct {
	Restart bool `json:"restart"`
}

// CommOpen asks the kernel to open its end of a channel between the front end
// and a target in the kernel.
type CommOpen struct {
	CommID     string          `json:"comm_id"`
	TargetName string          `json:"target_name"`
	Data       json.RawMessage `json:"data"`
}

// InputReply is what the reader typed.
type InputReply struct {
	Value string `json:"value"`
}
