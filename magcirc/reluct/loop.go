package reluct

import "math"

// loopForm sets up the descent over the fluxes of the free loops.
func (k *task) loopForm(d *descent) {
	nb, nc := len(k.parts), len(k.topo.chord)
	d.alloc(len(k.free), nb)
	copy(d.shift, k.mmf)
	copy(d.base, k.size)
	for j, f := range k.fixed.fixed(nc) {
		for i, z := range k.topo.loop[j*nb : j*nb+nb] {
			d.x0[i] += f * z
		}
	}
	k.ways(d)
	d.eval = func(phi, g, slope []float64) {
		for i := range k.parts {
			if !k.topo.carry[i] {
				continue
			}
			g[i], slope[i] = k.parts[i].drop(phi[i])
			g[i] -= k.mmf[i]
		}
	}
}

// ways sets the factors z: the branch as a free loop runs through it, the fixed loops that follow it included.
func (k *task) ways(d *descent) {
	nb, nc := len(k.parts), len(k.topo.chord)
	rows := k.topo.loop
	if len(k.fixed.winding) > 0 {
		rows = append([]float64(nil), rows...)
		for p, q := range k.fixed.pivot {
			for _, j := range k.free {
				if q < 0 || k.fixed.reduced[p*nc+j] == 0 {
					continue
				}
				follow(rows[j*nb:j*nb+nb], k.topo.loop[q*nb:q*nb+nb], -k.fixed.reduced[p*nc+j])
			}
		}
	}
	count := 0
	for _, z := range rows {
		if z != 0 {
			count++
		}
	}
	d.start = make([]int, nb+1)
	d.index, d.coef = make([]int, 0, count), make([]float64, 0, count)
	for i := range nb {
		for to, j := range k.free {
			if z := rows[j*nb+i]; z != 0 {
				d.index, d.coef = append(d.index, to), append(d.coef, z)
			}
		}
		d.start[i+1] = len(d.index)
	}
}

func follow(row, other []float64, f float64) {
	for i, z := range other {
		row[i] += f * z
	}
}

// loopSolution gives the solution at the point that the descent has reached.
func (k *task) loopSolution(d *descent) *Solution {
	n := k.net
	s := n.newSolution()
	copy(s.Flux, d.x)
	k.missingCurrents(d)
	copy(s.Current, k.current)
	for _, node := range k.topo.order {
		i := k.topo.parent[node]
		if i < 0 {
			continue
		}
		rise := -d.g[i] + k.extra(i) // mmf less drop, From -> To
		if b := &n.branches[i]; b.To == node {
			s.Potential[node] = s.Potential[b.From] + rise
		} else {
			s.Potential[node] = s.Potential[b.To] - rise
		}
	}
	for i := range n.branches {
		for e := range n.branches[i].Elements {
			s.State[i][e] = n.branches[i].Elements[e].at(s.Flux[i])
		}
	}
	blur := 0.0
	for i, phi := range d.reach {
		blur = max(blur, 4*0x1p-52*(phi+math.Abs(s.Flux[i])))
	}
	k.conclude(s, d, blur)
	return s
}

// missingCurrents sets the currents of the windings of prescribed linkage: they supply the mmf that the loops lack
// which they fix.
func (k *task) missingCurrents(d *descent) {
	if len(k.fixed.winding) == 0 {
		return
	}
	nb := len(k.parts)
	missing := make([]float64, len(k.topo.chord))
	for _, q := range k.fixed.pivot {
		if q < 0 {
			continue
		}
		missing[q] = 0
		for i, z := range k.topo.loop[q*nb : q*nb+nb] {
			if z != 0 {
				missing[q] += z * d.g[i]
			}
		}
	}
	for v, i := range k.fixed.currents(missing) {
		k.current[k.fixed.winding[v]] = i
	}
}

// extra gives the mmf of the windings of prescribed linkage on branch i.
func (k *task) extra(i int) float64 {
	f := 0.0
	for _, t := range k.net.branches[i].Turns {
		for _, w := range k.fixed.winding {
			if t.Winding == w {
				f += t.Turns * k.current[w]
			}
		}
	}
	return f
}

// worstOfLoop names the part with the largest drop among those of the loop with the largest residual.
func (k *task) worstOfLoop(d *descent) string {
	worst, most := "no loop", -1.0
	for i := range k.parts {
		for p := d.start[i]; p < d.start[i+1]; p++ {
			if d.index[p] != d.worst {
				continue
			}
			for e := range k.net.branches[i].Elements {
				if u := math.Abs(k.net.branches[i].Elements[e].at(d.x[i]).MMF); !(u <= most) {
					worst, most = k.net.part(i, e), u
				}
			}
		}
	}
	return worst
}
