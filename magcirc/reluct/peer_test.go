package reluct_test

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
	"time"

	"ampturn/magcirc/phys"
	"ampturn/magcirc/reluct"
)

// peerBranch and peerNetwork are the input of testdata/peers/networks.py.
type peerBranch struct {
	From   int     `json:"from"`
	To     int     `json:"to"`
	Law    string  `json:"law"`
	Length float64 `json:"length"`
	Area   float64 `json:"area"`
	Chi    float64 `json:"chi"`
	Ms     float64 `json:"ms"`
	MMF    float64 `json:"mmf"`
	Coil   int     `json:"coil"`
	Turns  float64 `json:"turns"`
}

type peerNetwork struct {
	Nodes    int          `json:"nodes"`
	Branches []peerBranch `json:"branches"`
	Linkages []float64    `json:"linkages"`
}

type peerAnswer struct {
	Method   string      `json:"method"`
	Program  string      `json:"program"`
	Networks int         `json:"networks"`
	Solved   int         `json:"solved"`
	Reported int         `json:"reported"`
	MS       float64     `json:"ms"`
	Flux     [][]float64 `json:"flux"`
}

// forPeer writes a plain sample as the peer reads it.
func forPeer(s *sample) peerNetwork {
	p := peerNetwork{Nodes: s.Nodes, Linkages: []float64{}}
	for _, b := range s.Branches {
		e := b.Elements[0]
		q := peerBranch{From: b.From, To: b.To, Law: "gap", Length: e.Length, Area: e.Area, Chi: 1, Ms: 1, Coil: -1}
		if law, ok := e.Law.(known); ok {
			q.Law = [...]string{"langevin", "arctan", "froehlich"}[law.shape]
			q.Chi, q.Ms = law.mui-1, law.bs/phys.Mu0
		}
		for _, turn := range b.Turns {
			if l, prescribed := s.Drive.Linkage[turn.Winding]; prescribed {
				q.Coil, q.Turns = len(p.Linkages), turn.Turns
				p.Linkages = append(p.Linkages, l)
			} else {
				q.MMF += turn.Turns * s.Drive.Current[turn.Winding]
			}
		}
		p.Branches = append(p.Branches, q)
	}
	return p
}

// TestAgainstScipy gives 200 random networks to the root finders of scipy (testdata/peers/networks.py), and holds
// fluxes and times in one run against its own. AMPTURN_PYTHON is the path of a Python interpreter with scipy.
//
// The ratios asked for are 20 over hybr and 100 over lm, both with Jacobian, making of network and equations included.
// The peer's time is processor time, ours the best of several passes by the clock, group by group, before and after:
// both come near what an idle machine would show, also when it is not idle. The ratios can fail only where
// AMPTURN_SPEED is set, which promises that nothing else runs.
func TestAgainstScipy(t *testing.T) {
	python := os.Getenv("AMPTURN_PYTHON")
	if python == "" {
		t.Skip("AMPTURN_PYTHON is not set: the path of a Python interpreter with scipy")
	}
	if out, err := exec.Command(python, "-c", "import scipy").CombinedOutput(); err != nil {
		t.Skipf("%s has no scipy: %v %s", python, err, out)
	}
	if raceDetector {
		t.Skip("times mean nothing under the race detector")
	}
	const count = 200
	g := newGenerator(200)
	g.Plain = true
	samples, peers := make([]sample, count), make([]peerNetwork, count)
	for k := range samples {
		samples[k] = g.sample()
		peers[k] = forPeer(&samples[k])
	}
	var ours stopwatch
	flux := ours.run(t, samples)
	answers := runPeer(t, python, peers)
	ours.run(t, samples)
	t.Logf("this package: %d of %d solved, %.1f us per network", count, count, ours.ms(count)*1e3)
	for _, a := range answers {
		apart, compared := worst{}, 0
		for k, theirs := range a.Flux {
			if theirs != nil {
				apart.see(k, largestDifference(flux[k], theirs))
				compared++
			}
		}
		t.Logf("%s, %s: %d of %d solved (reports %d), %.2f ms per network, ratio %.0f; fluxes differ by %v of the largest", a.Program, a.Method, a.Solved, a.Networks,
			a.Reported, a.MS, a.MS/ours.ms(count), apart)
		if compared < count/4 || apart.value > 1e-4 {
			t.Errorf("%s: %d networks compared, fluxes apart by %v of the largest", a.Method, compared, apart)
		}
		if want := map[string]float64{"hybr": 20, "lm": 100}[a.Method]; os.Getenv("AMPTURN_SPEED") != "" && a.MS/ours.ms(count) < want {
			t.Errorf("%s takes only %.1f times as long, want %g", a.Method, a.MS/ours.ms(count), want)
		}
	}
}

// stopwatch holds the best time of each group of 20 networks over several passes.
type stopwatch struct{ best []time.Duration }

// run solves the samples seven times over, making of the networks included, and gives the fluxes.
func (w *stopwatch) run(t *testing.T, samples []sample) (flux [][]float64) {
	t.Helper()
	const group = 20
	for range 7 {
		flux = flux[:0]
		for lo := 0; lo < len(samples); lo += group {
			start := time.Now()
			for k := lo; k < min(lo+group, len(samples)); k++ {
				s, err := samples[k].build().Solve(context.Background(), samples[k].Drive, nil)
				if err != nil {
					t.Fatalf("network %d: %v", k, err)
				}
				flux = append(flux, s.Flux)
			}
			spent := time.Since(start)
			if i := lo / group; i == len(w.best) {
				w.best = append(w.best, spent)
			} else {
				w.best[i] = min(w.best[i], spent)
			}
		}
	}
	return flux
}

// ms gives the time per network.
func (w *stopwatch) ms(count int) float64 {
	sum := 0.0
	for _, d := range w.best {
		sum += d.Seconds()
	}
	return sum * 1e3 / float64(count)
}

func runPeer(t *testing.T, python string, networks []peerNetwork) []peerAnswer {
	t.Helper()
	data, err := json.Marshal(networks)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "networks.json")
	if err := os.WriteFile(file, data, 0o644); err != nil {
		t.Fatal(err)
	}
	command := exec.Command(python, filepath.Join("..", "..", "testdata", "peers", "networks.py"), file)
	command.Env = append(os.Environ(), "OMP_NUM_THREADS=1", "OPENBLAS_NUM_THREADS=1") // small matrices: threads only hinder
	var stderr bytes.Buffer
	command.Stderr = &stderr
	out, err := command.Output()
	if err != nil {
		t.Fatalf("%v: %s", err, stderr.String())
	}
	var answers []peerAnswer
	for dec := json.NewDecoder(bytes.NewReader(out)); dec.More(); {
		var a peerAnswer
		if err := dec.Decode(&a); err != nil {
			t.Fatal(err)
		}
		answers = append(answers, a)
	}
	if len(answers) != 2 {
		t.Fatalf("%d answers from the peer, want 2", len(answers))
	}
	return answers
}

// TestStoredNetworks solves 200 networks from a file of another program with the potentials that it found. Branches
// I -> J of length L and area Ar by law Kind (0 gap, 1 Langevin, 2 arctan, 3 Froehlich) carry the mmf F and N turns of
// winding W, whose linkage is Lam[W]; Y are the potentials of the nodes but the first, then the currents.
// AMPTURN_PEERS is the folder that holds peer_networks_200.json.
func TestStoredNetworks(t *testing.T) {
	dir := os.Getenv("AMPTURN_PEERS")
	if dir == "" {
		t.Skip("AMPTURN_PEERS is not set: the folder that holds peer_networks_200.json")
	}
	data, err := os.ReadFile(filepath.Join(dir, "peer_networks_200.json"))
	if err != nil {
		t.Fatal(err)
	}
	var stored []storedNetwork
	if err := json.Unmarshal(data, &stored); err != nil {
		t.Fatal(err)
	}
	var apart, balance, residual worst
	missing := 0
	for k := range stored {
		n, drive, kept := stored[k].build()
		s, err := n.Solve(context.Background(), drive, nil)
		if err != nil {
			t.Errorf("network %d: %v", k, err)
			continue
		}
		balance.see(k, s.NodeBalance)
		residual.see(k, s.Residual)
		if stored[k].Y == nil { // the other program found no solution
			missing++
			continue
		}
		all := make([]float64, len(stored[k].Br)) // dead ends carry no flux
		for i, b := range kept {
			all[b] = s.Flux[i]
		}
		apart.see(k, largestDifference(all, stored[k].flux()))
	}
	t.Logf("%d networks, %d of them without a stored solution; worst: residual %v, node balance %v, flux against the stored solution %v", len(stored), missing, residual, balance, apart)
	if apart.value > 1e-5 || balance.value > 1e-9 || residual.value > 1e-9 {
		t.Error("a bound is missed: flux 1e-5 of the largest, balance 1e-9, residual 1e-9")
	}
}

type storedNetwork struct {
	NN int
	Br []struct {
		I, J, Kind, W        int
		L, Ar, Chi, Ms, F, N float64
	}
	Lam, Y []float64
}

// build makes the network without its dead ends and says which branches are left.
func (s *storedNetwork) build() (n *reluct.Network, d reluct.Drive, kept []int) {
	gone := make([]bool, len(s.Br))
	for again := true; again; {
		again = false
		ends := make([]int, s.NN)
		for i, b := range s.Br {
			if !gone[i] {
				ends[b.I]++
				ends[b.J]++
			}
		}
		for i, b := range s.Br {
			if !gone[i] && (ends[b.I] == 1 || ends[b.J] == 1) {
				gone[i], again = true, true
			}
		}
	}
	n = reluct.New("T1")
	for i := range s.NN {
		n.Node(nodeNames[i])
	}
	d = reluct.Drive{Current: map[int]float64{}, Linkage: map[int]float64{}}
	for i, b := range s.Br {
		if gone[i] {
			continue
		}
		e := airGap("gap", b.L, b.Ar)
		if b.Kind > 0 {
			e = reluct.Element{Law: saturating{b.Kind - 1, b.Chi, b.Ms}, Length: b.L, Area: b.Ar}
		}
		turns := []reluct.Turn{{Winding: n.Winding(windingNames[i]), Turns: 1}}
		d.Current[turns[0].Winding] = b.F
		if b.W >= 0 {
			w := n.Winding("lambda " + windingNames[b.W])
			turns = append(turns, reluct.Turn{Winding: w, Turns: b.N})
			d.Linkage[w] = s.Lam[b.W]
		}
		n.Branch(reluct.Branch{From: b.I, To: b.J, Elements: []reluct.Element{e}, Turns: turns})
		kept = append(kept, i)
	}
	return n, d, kept
}

// flux gives the fluxes of the stored potentials and currents.
func (s *storedNetwork) flux() []float64 {
	at := func(node int) float64 {
		if node == 0 {
			return 0
		}
		return s.Y[node-1]
	}
	flux := make([]float64, len(s.Br))
	for i, b := range s.Br {
		u := b.F + at(b.I) - at(b.J)
		if b.W >= 0 {
			u += b.N * s.Y[s.NN-1+b.W]
		}
		flux[i] = phys.Mu0 * u / b.L * b.Ar
		if b.Kind > 0 {
			x, _ := saturating{b.Kind - 1, b.Chi, b.Ms}.At(u / b.L)
			flux[i] = x * b.Ar
		}
	}
	return flux
}
