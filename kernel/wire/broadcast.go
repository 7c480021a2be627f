package wire

// ExecutionState says what the kernel does: "starting", "busy", "idle".
type ExecutionState struct {
	State string `json:"execution_state"`
}

// ExecuteInput tells all front ends what is being run.
type ExecuteInput struct {
	Code           string `json:"code"`
	ExecutionCount int    `json:"execution_count"`
}

// Stream is text written to "stdout" or "stderr".
type Stream struct {
	Name string `json:"name"`
	Text string `json:"text"`
}

// DisplayData is a value to show; also the content of update_display_data.
type DisplayData struct {
	Data      map[string]any `json:"data"`
	Metadata  map[string]any `json:"metadata"`
	Transient map[string]any `json:"transient"`
}

// ExecuteResult is the value of a cell.
type ExecuteResult struct {
	ExecutionCount int            `json:"execution_count"`
	Data           map[string]any `json:"data"`
	Metadata       map[string]any `json:"metadata"`
}

// ClearOutput takes back what the cell has shown.
type ClearOutput struct {
	Wait bool `json:"wait"`
}

// CommClose tells the front end that a channel is closed.
type CommClose struct {
	CommID string         `json:"comm_id"`
	Data   map[string]any `json:"data"`
}

// InputRequest asks the reader for a line.
type InputRequest struct {
	Prompt   string `json:"prompt"`
	Password bool   `json:"password"`
}

// Welcome tells a subscriber that its subscription counts.
type Welcome struct {
	Subscription string `json:"subscription"`
}
