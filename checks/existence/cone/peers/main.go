// Command peers times package cone beside a general linear-programming solver,
// HiGHS as called by SciPy, on the same tables in one run, and prints the ratios.
//
//	go run ./checks/existence/cone/peers -python python3
//
// Each table is asked of the solver in two forms: as stated (maximise the sum of
// the rows times d, subject to every row ≥ 0 and the sum ≤ 1) and dual (find
// λ ≥ 0 with Σ λ_i x_i = −Σ x_i). The time of cone includes the building of the
// problem and the exact certificate; that of the solver is linprog alone.
package main

import (
	"bufio"
	"context"
	"encoding/binary"
	"encoding/json"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"time"

	"wellposed/checks/existence/cone"
	"wellposed/checks/existence/cone/invent"
)

type peer struct {
	Stated, Dual       float64 // seconds
	StatedSays, DualIs string
}

func main() {
	python := flag.String("python", "python3", "a Python with SciPy")
	script := flag.String("script", filepath.Join("checks", "existence", "cone", "peers", "highs.py"), "the script that calls the solver")
	kinds := flag.String("kinds", "over,quasi,hid,complete", "kinds of table")
	rows := flag.String("rows", "1000,10000,100000", "numbers of rows")
	cols := flag.String("columns", "20,50", "numbers of columns")
	limit := flag.Float64("limit", 60, "seconds allowed for one call of the solver")
	flag.Parse()
	if err := run(*python, *script, *kinds, *rows, *cols, *limit); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

func run(python, script, kinds, rows, cols string, limit float64) error {
	dir, err := os.MkdirTemp("", "cone")
	if err != nil {
		return err
	}
	defer os.RemoveAll(dir)
	cmd := exec.Command(python, script, strconv.FormatFloat(limit, 'g', -1, 64))
	in, err := cmd.StdinPipe()
	if err != nil {
		return err
	}
	out, err := cmd.StdoutPipe()
	if err != nil {
		return err
	}
	cmd.Stderr = os.Stderr
	if err := cmd.Start(); err != nil {
		return err
	}
	answers := bufio.NewReader(out)
	fmt.Printf("%-10s %10s %-16s %10s %12s %12s %9s %9s\n", "table", "size", "verdict", "cone ms", "stated ms", "dual ms", "ratio", "better")
	for _, kind := range strings.Split(kinds, ",") {
		for _, n := range numbers(rows) {
			for _, p := range numbers(cols) {
				columns, senses := invent.Logistic(kind, n, p, 1)
				ours, verdict, err := timed(columns, senses)
				if err != nil {
					return err
				}
				path := filepath.Join(dir, "table")
				if err := write(path, columns, senses); err != nil {
					return err
				}
				exponents := make([]int, p)
				for j := range columns {
					exponents[j] = columns[j].Exponent
				}
				ask, err := json.Marshal(map[string]any{"path": path, "n": n, "p": p, "exponents": exponents})
				if err != nil {
					return err
				}
				if _, err := fmt.Fprintf(in, "%s\n", ask); err != nil {
					return err
				}
				line, err := answers.ReadBytes('\n')
				if err != nil {
					return err
				}
				var a peer
				if err := json.Unmarshal(line, &a); err != nil {
					return err
				}
				fmt.Printf("%-10s %10s %-16v %10.2f %12s %12s %9.1f %9.1f\n", kind, fmt.Sprintf("%d×%d", n, p), verdict, 1e3*ours,
					show(a.Stated, a.StatedSays), show(a.Dual, a.DualIs), a.Stated/ours, min(a.Stated, a.Dual)/ours)
			}
		}
	}
	in.Close()
	return cmd.Wait()
}

func show(seconds float64, note string) string { return fmt.Sprintf("%.1f %s", 1e3*seconds, note) }

func numbers(list string) []int {
	var out []int
	for _, s := range strings.Split(list, ",") {
		if v, err := strconv.Atoi(s); err == nil {
			out = append(out, v)
		}
	}
	return out
}

// timed is the median of several runs, in seconds.
func timed(columns []cone.Column, senses []cone.Sense) (float64, cone.Verdict, error) {
	var times []float64
	var verdict cone.Verdict
	for range 7 {
		start := time.Now()
		pr, err := cone.NewProblem(columns, senses)
		if err != nil {
			return 0, 0, err
		}
		r, err := cone.Decide(context.Background(), pr)
		if err != nil {
			return 0, 0, err
		}
		times = append(times, time.Since(start).Seconds())
		verdict = r.Verdict
	}
	slices.Sort(times)
	return times[len(times)/2], verdict, nil
}

// write puts the senses and then the columns into a file of 64-bit integers.
func write(path string, columns []cone.Column, senses []cone.Sense) error {
	f, err := os.Create(path)
	if err != nil {
		return err
	}
	w := bufio.NewWriter(f)
	s := make([]int64, len(senses))
	for i, v := range senses {
		s[i] = int64(v)
	}
	if err := binary.Write(w, binary.LittleEndian, s); err != nil {
		return err
	}
	for _, c := range columns {
		if err := binary.Write(w, binary.LittleEndian, c.Mantissa); err != nil {
			return err
		}
	}
	if err := w.Flush(); err != nil {
		return err
	}
	return f.Close()
}
