package kernel

import "context"

// commInfo answers comm_info_request: this kernel keeps no comms open.
func (k *Kernel) commInfo(_ context.Context, r *request) {
	r.around(&struct{}{}, func() any {
		return struct {
			Status string         `json:"status"`
			Comms  map[string]any `json:"comms"`
		}{"ok", map[string]any{}}
	})
}

// commOpen refuses a comm: its target is not known here, so it is closed at once.
func (k *Kernel) commOpen(_ context.Context, r *request) {
	r.busy()
	defer r.idle()
	var c struct {
		ID string `json:"comm_id"`
	}
	if err := r.decode(&c); err != nil || c.ID == "" {
		k.opt.Log("comm_open without an id")
		return
	}
	r.publish("comm_close", struct { // plain strings: it cannot fail
		ID   string         `json:"comm_id"`
		Data map[string]any `json:"data"`
	}{c.ID, map[string]any{}})
}

// commIgnore drops what is meant for a comm that is not open.
func (k *Kernel) commIgnore(_ context.Context, r *request) {
	r.busy()
	r.idle()
}
