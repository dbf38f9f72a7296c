package kernel

import (
	"context"
	"slices"
	"sync"
)

// entry is one cell that ran with a number.
type entry struct {
	number int
	source string
	output *string // text of its result; nil: none
}

// history keeps the cells of this process.
type history struct {
	mu      sync.Mutex
	entries []entry
	bytes   int
}

// What is kept is bounded; front ends ask for the last thousand cells at most.
const (
	maxHistory      = 5000
	maxHistoryBytes = 16 << 20
)

func (e entry) size() int {
	n := len(e.source)
	if e.output != nil {
		n += len(*e.output)
	}
	return n
}

// add appends an entry and forgets the oldest ones beyond the bounds. The newest always stays.
func (h *history) add(e entry) {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.entries = append(h.entries, e)
	h.bytes += e.size()
	drop := 0
	for drop < len(h.entries)-1 && (len(h.entries)-drop > maxHistory || h.bytes > maxHistoryBytes) {
		h.bytes -= h.entries[drop].size()
		h.entries[drop] = entry{}
		drop++
	}
	h.entries = h.entries[drop:]
}

// thisSession is the number under which the running process is told; 0 also means it.
const thisSession = 1

type historyRequest struct {
	Output  bool   `json:"output"`
	Access  string `json:"hist_access_type"`
	Session int    `json:"session"`
	Start   int    `json:"start"`
	Stop    *int   `json:"stop"`
	N       *int   `json:"n"`
	Pattern string `json:"pattern"`
	Unique  bool   `json:"unique"`
}

// tellHistory answers history_request.
func (k *Kernel) tellHistory(_ context.Context, r *request) {
	var c historyRequest
	r.around(&c, func() any {
		session := thisSession
		if c.Access == "range" {
			session = c.Session
		}
		list := [][3]any{}
		for _, e := range k.history.find(&c) {
			item := [3]any{session, e.number, e.source}
			if c.Output {
				item[2] = [2]any{e.source, e.output}
			}
			list = append(list, item)
		}
		return struct {
			Status  string   `json:"status"`
			History [][3]any `json:"history"`
		}{"ok", list}
	})
}

// find gives the entries that a request asks for, oldest first.
func (h *history) find(c *historyRequest) []entry {
	h.mu.Lock()
	all := slices.Clone(h.entries)
	h.mu.Unlock()
	switch c.Access {
	case "range":
		return slices.DeleteFunc(all, func(e entry) bool {
			other := c.Session != 0 && c.Session != thisSession
			return other || e.number < c.Start || c.Stop != nil && e.number >= *c.Stop
		})
	case "search":
		all = slices.DeleteFunc(all, func(e entry) bool { return !glob(c.Pattern, e.source) })
		if c.Unique {
			all = newest(all)
		}
	}
	if c.N != nil && *c.N >= 0 && *c.N < len(all) {
		all = all[len(all)-*c.N:]
	}
	return all
}

// newest keeps the last of equal sources.
func newest(all []entry) []entry {
	seen := make(map[string]bool)
	var kept []entry
	for _, e := range slices.Backward(all) {
		if !seen[e.source] {
			seen[e.source] = true
			kept = append(kept, e)
		}
	}
	slices.Reverse(kept)
	return kept
}

// glob matches a whole text against a pattern with * and ?.
func glob(pattern, text string) bool {
	p, t := []rune(pattern), []rune(text)
	star, mark := -1, 0
	i, j := 0, 0
	for j < len(t) {
		switch {
		case i < len(p) && p[i] == '*':
			star, mark = i, j
			i++
		case i < len(p) && (p[i] == '?' || p[i] == t[j]):
			i++
			j++
		case star >= 0:
			mark++
			i, j = star+1, mark
		default:
			return false
		}
	}
	for i < len(p) && p[i] == '*' {
		i++
	}
	return i == len(p)
}
