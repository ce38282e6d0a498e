package cone

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"
)

func TestSolveExact(t *testing.T) {
	g := rand.New(rand.NewPCG(5, 5))
	for trial := range 400 {
		n := 1 + g.IntN(12)
		size := int64(1) << (1 + g.IntN(60))
		a := make([]int64, n*n)
		for i := range a {
			a[i] = g.Int64N(2*size+1) - size
		}
		b := make([]*big.Int, n)
		for i := range b {
			b[i] = big.NewInt(g.Int64() >> g.IntN(63))
			if g.IntN(2) == 0 {
				b[i].Neg(b[i])
			}
			if g.IntN(3) == 0 {
				b[i].Mul(b[i], big.NewInt(g.Int64()>>8))
			}
		}
		num, den, ok, err := solveExact(context.Background(), a, n, b)
		if err != nil {
			t.Fatal(err)
		}
		rows := make([][]int64, n)
		for i := range rows {
			rows[i] = a[i*n : i*n+n]
		}
		_, rank := nullOf(n, rows)
		if ok != (rank == n) {
			t.Fatalf("trial %d: n = %d, size %d, rank %d, solved %v", trial, n, size, rank, ok)
		}
		if !ok {
			continue
		}
		for i := range n {
			sum := new(big.Int)
			for j := range n {
				sum.Add(sum, new(big.Int).Mul(big.NewInt(a[i*n+j]), num[j]))
			}
			if sum.Cmp(new(big.Int).Mul(den, b[i])) != 0 {
				t.Fatalf("trial %d: row %d is off", trial, i)
			}
		}
	}
}

func TestFold(t *testing.T) {
	g := rand.New(rand.NewPCG(1, 1))
	q := big.NewInt(prime)
	for range 10000 {
		hi, lo := g.Uint64()>>g.IntN(64), g.Uint64()
		if g.IntN(10) == 0 {
			hi, lo = ^uint64(0), ^uint64(0)
		}
		v := new(big.Int).SetUint64(hi)
		v.Lsh(v, 64).Add(v, new(big.Int).SetUint64(lo))
		if want := v.Mod(v, q).Uint64(); fold(hi, lo) != want {
			t.Fatalf("fold(%d, %d) = %d, want %d", hi, lo, fold(hi, lo), want)
		}
	}
}
