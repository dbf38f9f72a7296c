package reluct

// approachSteps is the number of steps of approach: from 3 to 12 the time per network is the same within 3 %.
const approachSteps = 6

// approach moves the descent of the loop form from zero flux towards the solution by a few steps of Kacanov's
// method: solve the linear network in which every leg has the reluctance U/phi(U) of the step before. For laws whose
// permeability falls with the field each step lowers the co-energy, without a line search and without an inverse law;
// the first step takes every leg as if the largest mmf lay across it, which keeps its flux below saturation. Newton's
// method then starts where the legs that saturate are known, from any point with the same end.
//
// Source: L. M. Kacanov's method of secant modules, as in S. Fucik, A. Kratochvil, J. Necas, Kacanov-Galerkin method,
// Comment. Math. Univ. Carolinae 14 (1973) 651-659 (from memory).
func (k *task) approach(d *descent) {
	most := 0.0
	for _, f := range k.size {
		most = max(most, f)
	}
	if d.n == 0 || most == 0 {
		return
	}
	count := 0
	for i := range k.parts {
		count += len(k.parts[i].legs)
	}
	secant := make([]float64, count)
	at := 0
	for i := range k.parts {
		for j := range k.parts[i].legs {
			secant[at] = k.parts[i].legs[j].secant(most)
			at++
		}
	}
	for range approachSteps {
		if !k.linear(d, secant) {
			clear(d.y)
			return
		}
	}
}

// secant gives the reluctance U/phi in 1/H of the leg at mmf drop u.
func (l *leg) secant(u float64) float64 {
	phi, slope := l.carry(u)
	if r := u / phi; r > 0 && finite(r) {
		return r
	}
	return 1 / slope
}

// linear moves to the state of the network with the given reluctances of the legs, and gives those of the next step.
func (k *task) linear(d *descent, secant []float64) bool {
	at := 0
	clear(d.row)
	for i := range k.parts {
		if !k.topo.carry[i] {
			at += len(k.parts[i].legs)
			continue
		}
		r := k.parts[i].linear
		for range k.parts[i].legs {
			r += secant[at]
			at++
		}
		d.slope[i] = r
		g := r*d.x0[i] - k.mmf[i]
		for p := d.start[i]; p < d.start[i+1]; p++ {
			d.row[d.index[p]] += d.coef[p] * g
		}
	}
	if !d.direction() {
		return false
	}
	copy(d.y, d.step)
	at = 0
	for i := range k.parts {
		phi := d.x0[i] + d.dx[i]
		for j := range k.parts[i].legs {
			secant[at] = k.parts[i].legs[j].secant(secant[at] * phi)
			at++
		}
	}
	return true
}
