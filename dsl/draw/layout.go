package draw

import "math"

// layout is where everything of a network goes. Rows are counted from the bottom.
type layout struct {
	width, height float64
	row           []int     // of each node
	rows          int       // rows in all, with the empty one above a lone node
	gapOfRows     float64   // px between two rows
	lane          []int     // of each path
	x             []float64 // middle of each lane
	label         []float64 // width of the labels of each lane
	names         float64   // width of the names of the nodes
	scale         float64   // px per metre for gaps, 0: no length known
	ends          [][2]int  // lower and upper row of each path
	paths         []Path
}

// layout places nodes in rows by their distance from the first path's start, paths in the first lane that is free.
func (n Network) layout() *layout {
	l := &layout{paths: n.Paths, row: n.order()}
	for k := range n.Nodes {
		l.rows = max(l.rows, l.row[k]+1)
	}
	for _, p := range n.Paths {
		lo, hi := min(l.row[p.From], l.row[p.To]), max(l.row[p.From], l.row[p.To])
		if lo == hi { // a path that closes in itself reaches to the next row
			hi++
		}
		l.ends = append(l.ends, [2]int{lo, hi})
		l.rows = max(l.rows, hi+1)
	}
	l.assignLanes()
	l.placeLanes(n)
	l.placeRows()
	return l
}

// order gives each node a row of its own: breadth first from the start of the first path, the rest after that.
func (n Network) order() []int {
	row := make([]int, len(n.Nodes))
	for k := range row {
		row[k] = -1
	}
	next := 0
	visit := func(start int) {
		queue := []int{start}
		for len(queue) > 0 {
			k := queue[0]
			queue = queue[1:]
			if row[k] >= 0 {
				continue
			}
			row[k] = next
			next++
			for _, p := range n.Paths {
				if p.From == k {
					queue = append(queue, p.To)
				} else if p.To == k {
					queue = append(queue, p.From)
				}
			}
		}
	}
	visit(n.Paths[0].From)
	for k := range row {
		if row[k] < 0 {
			visit(k)
		}
	}
	return row
}

// assignLanes gives each path the first lane in which its rows are free.
func (l *layout) assignLanes() {
	var taken [][][2]int // by lane: the spans in it
	for _, e := range l.ends {
		lane := 0
		for ; lane < len(taken); lane++ {
			free := true
			for _, t := range taken[lane] {
				if e[0] < t[1] && t[0] < e[1] {
					free = false
				}
			}
			if free {
				break
			}
		}
		if lane == len(taken) {
			taken = append(taken, nil)
		}
		taken[lane] = append(taken[lane], e)
		l.lane = append(l.lane, lane)
	}
	l.x = make([]float64, len(taken))
	l.label = make([]float64, len(taken))
}

// placeLanes finds the middle of each lane from the widths of labels, and spreads what is left of the page.
func (l *layout) placeLanes(n Network) {
	left := make([]float64, len(l.x))
	for k, p := range l.paths {
		i := l.lane[k]
		w := max(extent(p.Name), extent(p.Flux))
		for _, q := range p.Parts {
			w = max(w, extent(q.Name), extent(q.Label))
		}
		l.label[i] = max(l.label[i], min(w, labelMost))
		left[i] = max(left[i], columnLeft)
		if p.From == p.To {
			left[i] = loopLeft
		}
	}
	for _, name := range n.Nodes {
		l.names = max(l.names, min(extent(name), labelMost))
	}
	total := pad + l.names + pad
	for i := range l.x {
		total += left[i] + labelLeft + l.label[i] + pad
	}
	l.width = max(pageWidth, total)
	extra := (l.width - total) / float64(len(l.x))
	at := pad + l.names + pad
	for i := range l.x {
		l.x[i] = at + left[i] + extra/2
		at += left[i] + labelLeft + l.label[i] + pad + extra
	}
}

// placeRows finds the distance of rows and the scale of gaps.
func (l *layout) placeRows() {
	l.gapOfRows = leastRow
	if l.rows == 2 {
		l.gapOfRows = pageHeight - marginTop - marginLow
	}
	longest := 0.0
	for k, p := range l.paths {
		span := float64(l.ends[k][1] - l.ends[k][0])
		l.gapOfRows = max(l.gapOfRows, (slot*float64(max(1, len(p.Parts)))+2*stub)/span)
		length, gaps := 0.0, false
		for _, q := range p.Parts {
			length += q.Length
			gaps = gaps || q.Kind == Gap && q.Length > 0
		}
		if gaps {
			longest = max(longest, length)
		}
	}
	l.height = marginTop + marginLow + l.gapOfRows*float64(l.rows-1)
	if longest > 0 {
		l.scale = (l.gapOfRows - 2*stub) / longest
		l.limitScale()
	}
}

// limitScale makes the scale so small that every gap leaves iron to be seen in its slot.
func (l *layout) limitScale() {
	for _, p := range l.paths {
		for _, q := range p.Parts {
			if q.Kind == Gap && q.Length > 0 {
				l.scale = math.Min(l.scale, (slot-16)/q.Length)
			}
		}
	}
}

// y is the height of a row on the picture.
func (l *layout) y(row int) float64 { return l.height - marginLow - l.gapOfRows*float64(row) }

// upward is -1 where the arrow of path k points up on the picture, +1 where it points down.
func (l *layout) upward(k int) float64 {
	if p := l.paths[k]; l.row[p.To] >= l.row[p.From] {
		return -1
	}
	return 1
}
