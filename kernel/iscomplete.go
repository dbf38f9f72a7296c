package kernel

import "context"

type isCompleteReply struct {
	Status string  `json:"status"`
	Indent *string `json:"indent,omitempty"` // of the next line; with "incomplete" only
}

// isComplete answers is_complete_request, which consoles send at the end of a line.
func (k *Kernel) isComplete(_ context.Context, r *request) {
	var c struct {
		Code string `json:"code"`
	}
	r.around(&c, func() any {
		status, indent := k.engine.IsComplete(c.Code)
		reply := isCompleteReply{Status: status}
		if status == "incomplete" {
			reply.Indent = &indent
		}
		return reply
	})
}
