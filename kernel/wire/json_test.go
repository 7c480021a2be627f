package wire

import (
	"encoding/json"
	"math"
	"testing"
	"time"
)

func TestMarshalNeverFails(t *testing.T) {
	type part struct {
		X float64 `json:"x"`
		Y float64 `json:"y,omitempty"`
		z int
	}
	type whole struct {
		part
		Name string
		Skip func() `json:"-"`
		When time.Time
	}
	loop := map[string]any{"a": 1}
	loop["self"] = loop
	for _, test := range []struct {
		name string
		v    any
		want string
	}{
		{"NaN", math.NaN(), `null`},
		{"Inf in a list", []float64{1, math.Inf(1), -2.5}, `[1,null,-2.5]`},
		{"NaN deep in a map", map[string]any{"a": map[string]any{"b": []any{math.NaN(), "c"}}}, `{"a":{"b":[null,"c"]}}`},
		{"NaN in a struct", whole{part: part{X: math.NaN(), z: 1}, Name: "n"}, `{"Name":"n","When":"0001-01-01T00:00:00Z","x":null}`},
		{"pointer to NaN", new(math.NaN()), `null`},
		{"keys that are numbers", map[float64]int{0.5: 1}, `{"0.5":1}`},
		{"complex", []complex128{1 + 2i}, `["(1+2i)"]`},
		{"function", map[string]any{"f": func() {}, "n": 1}, `{"f":null,"n":1}`},
		{"contains itself", loop, `{"a":1,"self":null}`},
		{"bytes beside NaN", map[string]any{"b": []byte{1, 2}, "x": math.Inf(-1)}, `{"b":"AQI=","x":null}`},
		{"raw JSON beside NaN", map[string]any{"r": json.RawMessage(`{"k":1}`), "x": math.NaN()}, `{"r":{"k":1},"x":null}`},
		{"HTML", "<b>&</b>", `"<b>&</b>"`},
		{"nil", nil, `null`},
		{"bytes that are not UTF-8", "a\xffb", "\"a\ufffdb\""},
	} {
		t.Run(test.name, func(t *testing.T) {
			got := string(Marshal(test.v))
			if test.name == "bytes that are not UTF-8" {
				// Written as an escape or as the character, the text is the same.
				var s, want string
				if json.Unmarshal([]byte(got), &s) != nil || json.Unmarshal([]byte(test.want), &want) != nil || s != want {
					t.Errorf("Marshal = %s, want %s", got, test.want)
				}
				return
			}
			if got != test.want {
				t.Errorf("Marshal = %s, want %s", got, test.want)
			}
		})
	}
}

func TestDateHasAZoneAndSixDigits(t *testing.T) {
	zone := time.FixedZone("", 2*3600)
	for _, test := range []struct {
		t    time.Time
		want string
	}{
		{time.Date(2026, 3, 4, 5, 6, 7, 123456789, time.UTC), "2026-03-04T05:06:07.123456Z"},
		{time.Date(2026, 3, 4, 5, 6, 7, 0, zone), "2026-03-04T03:06:07.000000Z"},
	} {
		if got := FormatDate(test.t); got != test.want {
			t.Errorf("FormatDate(%v) = %s, want %s", test.t, got, test.want)
		}
	}
	// A client of Python's isoformat writes an offset with a colon.
	h := Header{Date: "2026-03-04T05:06:07.123456+02:00"}
	if got, ok := h.Time(); !ok || got.UTC().Hour() != 3 {
		t.Errorf("Time() = %v, %v", got, ok)
	}
}

func TestHeadersDiffer(t *testing.T) {
	s := NewSender("u")
	seen := map[string]bool{}
	for range 1000 {
		h := s.Header("status")
		if seen[h.ID] {
			t.Fatalf("identifier %s given twice", h.ID)
		}
		seen[h.ID] = true
		if h.Session != s.Session() {
			t.Fatalf("session %s, want %s", h.Session, s.Session())
		}
	}
	if NewSender("u").Session() == s.Session() {
		t.Error("two senders share a session")
	}
}

func TestDecodeKeepsDefaults(t *testing.T) {
	m := New(Header{}, nil, map[string]any{"code": "1", "silent": nil})
	r := NewExecuteRequest()
	if err := m.Decode(&r); err != nil {
		t.Fatal(err)
	}
	if !r.StoreHistory || !r.StopOnError || r.AllowStdin || r.Silent || r.Code != "1" {
		t.Errorf("request = %+v, want the code, history stored, stop on error, nothing else", r)
	}
	if err := New(Header{}, nil, map[string]any{"code": 3}).Decode(&r); err == nil {
		t.Error("a number was accepted as code")
	}
}
