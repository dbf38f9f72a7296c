package kernel

import "context"

// shutdown answers shutdown_request and stops the kernel. Other front ends hear of it on iopub.
func (k *Kernel) shutdown(_ context.Context, r *request) {
	var c struct {
		Restart bool `json:"restart"`
	}
	r.around(&c, func() any {
		reply := struct {
			Status  string `json:"status"`
			Restart bool   `json:"restart"`
		}{"ok", c.Restart}
		r.publish("shutdown_reply", reply) // a plain value: it cannot fail
		return reply
	})
	k.Stop()
}
