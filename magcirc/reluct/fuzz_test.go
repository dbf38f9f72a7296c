package reluct_test

import (
	"context"
	"encoding/binary"
	"math"
	"testing"
	"time"

	"ampturn/magcirc/reluct"
)

// FuzzNetwork makes networks of arbitrary bytes, wrong indices and values included: each is refused by an error or
// solved, in a time without surprise, to a state of finite numbers whose fluxes balance.
func FuzzNetwork(f *testing.F) {
	f.Add([]byte{3, 2, 0, 1, 0, 1, 2, 2, 0, 1, 1, 2, 3})
	f.Add([]byte{2, 1, 0, 0, 3, 9, 9, 9, 9, 1, 1, 1, 2, 250, 4, 7})
	f.Add([]byte{5, 3, 0, 1, 0, 1, 100, 120, 2, 1, 2, 130, 140, 1, 0, 2, 3, 3, 4, 90, 3, 0, 2, 2, 200, 50, 1, 4, 4, 0, 1})
	f.Add([]byte{1, 1, 0, 0, 0, 1, 1, 0, 112, 64, 128, 128, 128, 1, 2, 30, 30, 100, 1, 0, 138, 1, 0, 0, 0, 1, 1, 60, 64, 16, 128, 128, 1, 3, 0}) // leg, gap, winding
	f.Fuzz(func(t *testing.T, data []byte) {
		if len(data) > 400 {
			return
		}
		n, d := fuzzed(data)
		ctx, cancel := context.WithTimeout(context.Background(), 20*time.Second)
		defer cancel()
		for _, solver := range []func(context.Context, reluct.Drive, *reluct.Settings) (*reluct.Solution, error){n.Solve, n.SolveNodal} {
			s, err := solver(ctx, d, nil)
			if ctx.Err() != nil {
				t.Fatal("no answer in 20 s")
			}
			if err != nil {
				continue
			}
			for _, list := range [][]float64{s.Flux, s.Potential, s.Current, s.Linkage, {s.Energy() * 0, s.Coenergy() * 0, s.Residual}} {
				for _, x := range list {
					if math.IsNaN(x) || math.IsInf(x, 0) {
						t.Fatalf("solution holds %g", x)
					}
				}
			}
			if _, err := s.Incremental(); err != nil {
				t.Logf("incremental inductances: %v", err)
			}
		}
	})
}

// fuzzed reads a network from bytes; values come from a byte on a scale of decades, with all that is not allowed.
func fuzzed(data []byte) (*reluct.Network, reluct.Drive) {
	next := func() int {
		if len(data) == 0 {
			return 1
		}
		b := data[0]
		data = data[1:]
		return int(b)
	}
	value := func() float64 {
		switch b := next(); b {
		case 255:
			return math.NaN()
		case 254:
			return math.Inf(1)
		case 253:
			return 0
		case 252:
			if len(data) >= 8 {
				x := math.Float64frombits(binary.LittleEndian.Uint64(data))
				data = data[8:]
				return x
			}
			return -1
		default:
			return math.Pow(10, float64(b-128)/16)
		}
	}
	n := reluct.New("F")
	nodes, windings := 1+next()%12, next()%6
	for i := range nodes {
		n.Node(nodeNames[i])
	}
	for i := range windings {
		n.Winding(windingNames[i])
	}
	d := reluct.Drive{Current: map[int]float64{}, Linkage: map[int]float64{}}
	for i := 0; len(data) > 0 && i < 60; i++ {
		b := reluct.Branch{From: next()%(nodes+1) - next()%2*next()/250, To: next() % nodes}
		for range next() % 4 {
			e := reluct.Element{Kind: reluct.Kind(next() % 5), Length: value(), Area: value(), Permeance: value(), Br: value() - 1, Mur: value()}
			if next()%4 == 0 {
				e.Air = value()
			}
			switch k := next() % 5; k {
			case 4:
				e.Law = linear(1 + math.Abs(value()))
			case 3:
			default:
				e.Law = polarised(k, 2+float64(next()*next()), 0.1+float64(next())/100)
			}
			b.Elements = append(b.Elements, e)
		}
		for range next() % 3 {
			b.Turns = append(b.Turns, reluct.Turn{Winding: next() % (windings + 1), Turns: float64(next() - 128)})
		}
		n.Branch(b)
	}
	for w := range windings {
		switch next() % 3 {
		case 0:
			d.Current[w] = value()
		case 1:
			d.Linkage[w] = value()
		}
	}
	return n, d
}
