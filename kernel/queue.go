package kernel

import (
	"context"
	"sync"
)

// queue holds requests in the order of their arrival.
type queue struct {
	mu    sync.Mutex
	items []*request
	wake  chan struct{}
}

func newQueue() *queue { return &queue{wake: make(chan struct{}, 1)} }

func (q *queue) push(r *request) {
	q.mu.Lock()
	q.items = append(q.items, r)
	q.mu.Unlock()
	select {
	case q.wake <- struct{}{}:
	default:
	}
}

// take takes the cells that have arrived so far. Other requests stay.
func (q *queue) take() []*request {
	q.mu.Lock()
	defer q.mu.Unlock()
	var cells, others []*request
	for _, r := range q.items {
		if r.family.lane == cell {
			cells = append(cells, r)
		} else {
			others = append(others, r)
		}
	}
	q.items = others
	return cells
}

// empty tells whether nothing waits.
func (q *queue) empty() bool {
	q.mu.Lock()
	defer q.mu.Unlock()
	return len(q.items) == 0
}

func (q *queue) pop() *request {
	q.mu.Lock()
	defer q.mu.Unlock()
	if len(q.items) == 0 {
		return nil
	}
	r := q.items[0]
	q.items[0] = nil
	q.items = q.items[1:]
	return r
}

// each serves the requests one after another until ctx ends.
func (q *queue) each(ctx context.Context, serve func(*request)) {
	for ctx.Err() == nil {
		if r := q.pop(); r != nil {
			serve(r)
			continue
		}
		select {
		case <-q.wake:
		case <-ctx.Done():
		}
	}
}
