package kernel

import (
	"context"
	"unicode/utf8"
)

// cursorRequest is the content of requests about a place in a source, counted in code points.
type cursorRequest struct {
	Code   string `json:"code"`
	Cursor *int   `json:"cursor_pos"`
}

// cursor gives the place within the source; without one it is the end.
func (c *cursorRequest) cursor() int {
	n := utf8.RuneCountInString(c.Code)
	if c.Cursor == nil {
		return n
	}
	return min(max(*c.Cursor, 0), n)
}

type completeReply struct {
	Status   string         `json:"status"`
	Matches  []string       `json:"matches"`
	Start    int            `json:"cursor_start"`
	End      int            `json:"cursor_end"`
	Metadata map[string]any `json:"metadata"`
}

// typedMatch tells a front end more about a match; the key of the list is the one that front ends read.
type typedMatch struct {
	Start     int    `json:"start"`
	End       int    `json:"end"`
	Text      string `json:"text"`
	Type      string `json:"type"`
	Signature string `json:"signature"`
}

// complete answers complete_request beside a running cell.
func (k *Kernel) complete(_ context.Context, r *request) {
	var c cursorRequest
	r.around(&c, func() any {
		got := k.engine.Complete(c.Code, c.cursor())
		reply := completeReply{
			Status: "ok", Matches: append([]string{}, got.Matches...), Start: got.Start, End: got.End,
			Metadata: map[string]any{},
		}
		if len(got.Types) == len(got.Matches) && len(got.Types) > 0 {
			reply.Metadata["_jupyter_types_experimental"] = typed(got)
		}
		return reply
	})
}

func typed(c Completion) []typedMatch {
	list := make([]typedMatch, len(c.Matches))
	for i, m := range c.Matches {
		list[i] = typedMatch{Start: c.Start, End: c.End, Text: m, Type: c.Types[i]}
		if i < len(c.Signatures) {
			list[i].Signature = c.Signatures[i]
		}
	}
	return list
}
