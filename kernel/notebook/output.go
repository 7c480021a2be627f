package notebook

import (
	"encoding/base64"
	"strings"
)

// Kinds of outputs.
const (
	Stream        = "stream"
	DisplayData   = "display_data"
	ExecuteResult = "execute_result"
	ErrorOutput   = "error"
)

// An Output is one output of a code cell. Which fields count depends on Kind.
type Output struct {
	Kind string

	// Stream: "stdout" or "stderr", and what was written.
	Name, Text string

	// DisplayData, ExecuteResult: the value by media type. Text is a string,
	// binary data a []byte (base64 in the file, and read back as that string),
	// and JSON types hold what encoding/json takes.
	Data     map[string]any
	Metadata map[string]any
	Count    int // ExecuteResult: the number of the run, 0 for null

	// ErrorOutput.
	ErrorName, ErrorValue string
	Traceback             []string

	kept *value // an output read from a file, written back as it was
}

// Outputs returns the outputs of a code cell. An output that is given back to
// SetOutputs is written as it was read; to change one make a new one.
func (c *Cell) Outputs() []Output {
	v := c.v.get("outputs")
	if v == nil {
		return nil
	}
	out := make([]Output, 0, len(v.items))
	for _, w := range v.items {
		o := Output{Kind: w.get("output_type").str(), kept: w}
		o.Name, o.Text = w.get("name").str(), join(w.get("text"))
		if data := w.get("data"); data != nil {
			o.Data = make(map[string]any, len(data.members))
			for _, m := range data.members {
				if isJSON(m.key) {
					o.Data[m.key] = m.val.toGo()
				} else {
					o.Data[m.key] = join(m.val)
				}
			}
		}
		o.Metadata, _ = w.get("metadata").toGo().(map[string]any)
		o.Count, _ = w.get("execution_count").integer()
		o.ErrorName, o.ErrorValue = w.get("ename").str(), w.get("evalue").str()
		if t := w.get("traceback"); t != nil {
			for _, l := range t.items {
				o.Traceback = append(o.Traceback, l.str())
			}
		}
		out = append(out, o)
	}
	return out
}

// SetOutputs replaces the outputs of a code cell.
func (c *Cell) SetOutputs(outputs []Output) error {
	v := &value{kind: array}
	for _, o := range outputs {
		w, err := o.tree()
		if err != nil {
			return err
		}
		v.items = append(v.items, w)
	}
	c.v.set("outputs", v)
	return nil
}

func (o *Output) tree() (*value, error) {
	if o.kept != nil {
		return o.kept, nil
	}
	v := &value{kind: object}
	v.set("output_type", newText(o.Kind))
	switch o.Kind {
	case Stream:
		v.set("name", newText(o.Name))
		v.set("text", lines(o.Text))
	case DisplayData, ExecuteResult:
		data := &value{kind: object}
		for k, x := range o.Data {
			w, err := mediaValue(k, x)
			if err != nil {
				return nil, err
			}
			data.set(k, w)
		}
		v.set("data", data)
		meta := &value{kind: object}
		if len(o.Metadata) > 0 {
			var err error
			if meta, err = fromGo(o.Metadata); err != nil {
				return nil, err
			}
		}
		v.set("metadata", meta)
		if o.Kind == ExecuteResult {
			n := newNull()
			if o.Count > 0 {
				n = newInt(o.Count)
			}
			v.set("execution_count", n)
		}
	case ErrorOutput:
		v.set("ename", newText(o.ErrorName))
		v.set("evalue", newText(o.ErrorValue))
		t := &value{kind: array}
		for _, l := range o.Traceback {
			t.items = append(t.items, newText(l))
		}
		v.set("traceback", t)
	}
	return v, nil
}

// mediaValue returns the value of one media type as it stands in a file.
func mediaValue(media string, x any) (*value, error) {
	if isJSON(media) {
		return fromGo(x)
	}
	switch x := x.(type) {
	case []byte:
		return newText(base64.StdEncoding.EncodeToString(x)), nil
	case string:
		if strings.HasPrefix(media, "text/") || media == "image/svg+xml" || media == "application/javascript" {
			return lines(x), nil
		}
		return newText(x), nil
	}
	return fromGo(x)
}

// isJSON says whether the format stores values of the media type as JSON.
func isJSON(media string) bool {
	return media == "application/json" ||
		strings.HasPrefix(media, "application/") && strings.HasSuffix(media, "+json")
}
