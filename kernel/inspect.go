package kernel

import "context"

type inspectReply struct {
	Status   string         `json:"status"`
	Found    bool           `json:"found"`
	Data     map[string]any `json:"data"`
	Metadata map[string]any `json:"metadata"`
}

// inspect answers inspect_request beside a running cell.
func (k *Kernel) inspect(_ context.Context, r *request) {
	var c cursorRequest
	r.around(&c, func() any {
		reply := inspectReply{Status: "ok", Data: map[string]any{}, Metadata: map[string]any{}}
		if data, ok := k.engine.Inspect(c.Code, c.cursor()); ok && data != nil {
			reply.Found, reply.Data = true, data
		}
		return reply
	})
}
