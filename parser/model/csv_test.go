package model

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// cut is readCSV with the cells as texts. It checks what the columns say of them.
func cut(text string, maxRows int) (header []string, cells [][]string, lines []int32, err error) {
	columns, err := readCSV(text, maxRows)
	if err != nil {
		return nil, nil, nil, err
	}
	for _, c := range columns {
		header, cells, lines = append(header, c.Name), append(cells, c.Texts), c.Lines
		again := &Column{Texts: c.Texts}
		again.fill()
		if again.Numeric != c.Numeric || !slices.Equal(again.Missing, c.Missing) || len(again.Floats) != len(c.Floats) {
			return nil, nil, nil, fmt.Errorf("%s is %v %v, its cells say %v %v", c.Name, c.Numeric, c.Missing, again.Numeric, again.Missing)
		}
		for i, x := range c.Floats {
			if math.Float64bits(x) != math.Float64bits(again.Floats[i]) {
				return nil, nil, nil, fmt.Errorf("%q is %v, not %v", c.Texts[i], x, again.Floats[i])
			}
		}
	}
	return header, cells, lines, nil
}

func TestReadCSV(t *testing.T) {
	for _, c := range []struct {
		name, text string
		header     []string
		rows       [][]string
		lines      []int32
		err        string
	}{
		{"plain", "a,b\n1,2\n3,4\n", []string{"a", "b"}, [][]string{{"1", "2"}, {"3", "4"}}, []int32{2, 3}, ""},
		{"no end of line", "a,b\n1,2", []string{"a", "b"}, [][]string{{"1", "2"}}, []int32{2}, ""},
		{"byte order mark", "\uFEFFa,b\n1,2\n", []string{"a", "b"}, [][]string{{"1", "2"}}, []int32{2}, ""},
		{"CRLF", "a,b\r\n1,2\r\n3,4\r\n", []string{"a", "b"}, [][]string{{"1", "2"}, {"3", "4"}}, []int32{2, 3}, ""},
		{"lone CR", "a,b\r1,2\r", []string{"a", "b"}, [][]string{{"1", "2"}}, []int32{2}, ""},
		{"blanks", " a , b\n 1 ,\t2 \n", []string{"a", "b"}, [][]string{{"1", "2"}}, []int32{2}, ""},
		{"quotes", "\"a\",b\n\"x, \"\"y\"\"\",2\n", []string{"a", "b"}, [][]string{{`x, "y"`, "2"}}, []int32{2}, ""},
		{"quoted line break", "a,b\n\"x\ny\",2\n3,4\n", []string{"a", "b"}, [][]string{{"x\ny", "2"}, {"3", "4"}}, []int32{2, 4}, ""},
		{"quoted blanks stay", "a\n\" x \"\n", []string{"a"}, [][]string{{" x "}}, []int32{2}, ""},
		{"blank lines", "a,b\n\n1,2\n\n", []string{"a", "b"}, [][]string{{"1", "2"}}, []int32{3}, ""},
		{"an empty cell in one column", "a\n1\n\n2\n", []string{"a"}, [][]string{{"1"}, {""}, {"2"}}, []int32{2, 3, 4}, ""},
		{"empty cells", "a,b\n,\n1,\n", []string{"a", "b"}, [][]string{{"", ""}, {"1", ""}}, []int32{2, 3}, ""},
		{"header only", "a,b\n", []string{"a", "b"}, nil, nil, ""},
		{"astral", "α,𝒳\n1,😀\n", []string{"α", "𝒳"}, [][]string{{"1", "😀"}}, []int32{2}, ""},
		{"empty", "", nil, nil, nil, "the file is empty"},
		{"ragged", "a,b\n1,2\n3\n", nil, nil, nil, "line 3: 1 cells"},
		{"too many", "a,b\n1,2,3\n", nil, nil, nil, "line 2: 3 cells"},
		{"not closed", "a,b\n1,\"x\n", nil, nil, nil, "line 2: a quoted cell is not closed"},
		{"text behind a quote", "a,b\n\"x\"y,2\n", nil, nil, nil, "line 2: text behind"},
		{"zero byte", "a,b\n1,2\n\x00,3\n", nil, nil, nil, "line 3: the file holds a zero byte"},
		{"Latin-1", "a,b\n1,2\n3,\xfc\n", nil, nil, nil, "line 3: the file is not UTF-8"},
	} {
		header, columns, lines, err := cut(c.text, MaxRows)
		if c.err != "" {
			if err == nil || !strings.Contains(err.Error(), c.err) {
				t.Errorf("%s: error %v", c.name, err)
			}
			continue
		}
		if err != nil || !slices.Equal(header, c.header) || !slices.Equal(lines, c.lines) {
			t.Errorf("%s: %q %v %v", c.name, header, lines, err)
			continue
		}
		for j, column := range columns {
			if len(column) != len(c.rows) {
				t.Errorf("%s: %q", c.name, columns)
				break
			}
			for i, cell := range column {
				if cell != c.rows[i][j] {
					t.Errorf("%s: row %d column %d: %q", c.name, i, j, cell)
				}
			}
		}
	}
}

// TestCSVNumbers: a number of any length in a file is the nearest double.
func TestCSVNumbers(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	var b strings.Builder
	b.WriteString("x,y\n")
	for range 20_000 {
		b.WriteString(strconv.FormatFloat(r.NormFloat64()*math.Pow(10, float64(r.IntN(12)-6)), 'f', r.IntN(22)-1, 64))
		b.WriteByte(',')
		b.WriteString(strconv.FormatUint(r.Uint64()>>r.IntN(64), 10))
		b.WriteByte('\n')
	}
	columns, err := readCSV(b.String(), MaxRows)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range columns {
		for i, text := range c.Texts {
			if want, _ := strconv.ParseFloat(text, 64); !c.Numeric || math.Float64bits(c.Floats[i]) != math.Float64bits(want) {
				t.Fatalf("%q: %v, want %v", text, c.Floats[i], want)
			}
		}
	}
}

func TestCSVBounds(t *testing.T) {
	if _, err := readCSV("a\n1\n2\n3\n", 2); err == nil || !strings.Contains(err.Error(), "line 4: more than 2 rows") {
		t.Error(err)
	}
	wide := strings.Repeat("a,", MaxColumns) + "a\n"
	if _, err := readCSV(wide, MaxRows); err == nil || !strings.Contains(err.Error(), "10001 columns") {
		t.Error(err)
	}
	long := "a\n" + strings.Repeat("x", MaxField+1) + "\n"
	if _, err := readCSV(long, MaxRows); err == nil || !strings.Contains(err.Error(), "a cell of 1048577 bytes") {
		t.Error(err)
	}
	// Blank lines below a wide header must not ask for rows × columns cells.
	header := strings.TrimSuffix(strings.Repeat("a,", MaxColumns), ",") + "\n"
	text := header + strings.Repeat("\n", 1_000_000)
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	columns, err := readCSV(text, MaxRows)
	runtime.ReadMemStats(&after)
	if err != nil || len(columns) != MaxColumns {
		t.Fatalf("%v, %d columns", err, len(columns))
	}
	if used := after.TotalAlloc - before.TotalAlloc; used > 64*uint64(len(text)) {
		t.Errorf("%d bytes for a text of %d", used, len(text))
	}
}

func TestColumns(t *testing.T) {
	m := build(t, "table t from \"t.csv\"\nunknown g per site : effect\nprior g flat\n", Memory{"t.csv": "x,site,w\n0.1,b,1\n,a,x\n1e-3,b,2\nNA,NA,3\n-7,c,NA\n"})
	c := m.Tables[0].Columns
	x := c[0]
	if !x.Numeric || c[1].Numeric || c[2].Numeric {
		t.Error("numeric", x.Numeric, c[1].Numeric, c[2].Numeric)
	}
	if got := x.Exact(0); got.Cmp(big.NewRat(1, 10)) != 0 {
		t.Error(got)
	}
	if got := x.Exact(2); got.Cmp(big.NewRat(1, 1000)) != 0 {
		t.Error(got)
	}
	if x.Exact(1) != nil || x.Exact(3) != nil || x.Exact(-1) != nil || x.Exact(5) != nil {
		t.Error("missing cells have values")
	}
	if !slices.Equal(x.Missing, []bool{false, true, false, true, false}) || !math.IsNaN(x.Floats[1]) || x.Floats[4] != -7 {
		t.Error(x.Missing, x.Floats)
	}
	if got := m.Unknowns[0].Levels; !slices.Equal(got, []string{"b", "a", "c"}) {
		t.Error(got)
	}
	if got := c[1].Codes; !slices.Equal(got, []int32{0, 1, 0, -1, 2}) {
		t.Error(got)
	}
	if x.Lines[4] != 6 || m.Tables[0].Rows != 5 {
		t.Error(x.Lines, m.Tables[0].Rows)
	}
}

func TestHashIgnoresLineEnds(t *testing.T) {
	text := "table t from \"t.csv\"\n"
	a := build(t, text, Memory{"t.csv": "x\n1\n2\n"}).Tables[0].Hash
	b := build(t, text, Memory{"t.csv": "x\r\n1\r\n2\r\n"}).Tables[0].Hash
	c := build(t, text, Memory{"t.csv": "x\n1\n3\n"}).Tables[0].Hash
	if a != b || a == c || len(a) != 64 {
		t.Error(a, b, c)
	}
}

func TestDisk(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) {
		t.Helper()
		path := filepath.Join(dir, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	write("outside.csv", "x\n1\n")
	write("in/data.csv", "x\n1\n")
	write("in/sub/more.csv", "x\n2\n")
	if err := os.Symlink(filepath.Join(dir, "outside.csv"), filepath.Join(dir, "in", "link.csv")); err != nil {
		t.Fatal(err)
	}
	model := filepath.Join(dir, "in", "m.bayes")
	root := filepath.Join(dir, "in")
	for _, c := range []struct {
		disk Disk
		name string
		want string // part of the error, or empty
	}{
		{Disk{}, "data.csv", ""},
		{Disk{}, "../outside.csv", ""},
		{Disk{Root: root}, "data.csv", ""},
		{Disk{Root: root}, "sub/more.csv", ""},
		{Disk{Root: root}, "../outside.csv", "leaves"},
		{Disk{Root: root}, "link.csv", "leaves"},
		{Disk{Root: root}, filepath.Join(dir, "outside.csv"), "leaves"},
		{Disk{}, "gone.csv", "no such file"},
		{Disk{}, ".", "folder"},
		{Disk{}, os.DevNull, "no regular file"},
		{Disk{MaxBytes: 2}, "data.csv", "at most"},
	} {
		content, _, err := c.disk.Load(model, c.name)
		if c.want == "" && (err != nil || !bytes.HasPrefix(content, []byte("x\n"))) || c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want)) {
			t.Errorf("%+v %s: %v", c.disk, c.name, err)
		}
	}
}

// FuzzCSV compares with encoding/csv where that reads the text, and otherwise
// asks only that nothing panics.
func FuzzCSV(f *testing.F) {
	for _, s := range []string{"a,b\n1,2\n", "\"a\"\"\",b\r\n\"1\n2\",\n", "a\n\n\n1", "\uFEFFx,y\n1,2", "a,b\n1\n", "x\n\"", "a, \"b\"\n"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		header, columns, lines, err := cut(text, 1000)
		if err == nil {
			for _, c := range columns {
				if len(c) != len(lines) || len(columns) != len(header) {
					t.Fatalf("%d cells, %d lines", len(c), len(lines))
				}
			}
		}
		// Blanks around cells and lone carriage returns are read in another way.
		if strings.ContainsAny(text, " \t\x00") || strings.Count(text, "\r") != strings.Count(text, "\r\n") || strings.HasPrefix(text, "\uFEFF") {
			return
		}
		r := csv.NewReader(strings.NewReader(text))
		records, standard := r.ReadAll()
		if standard != nil || len(records) < 2 || len(records) > 900 || strings.HasPrefix(text, "\n") || strings.HasPrefix(text, "\r") || records[0][0] == "" && len(records[0]) == 1 {
			return
		}
		if len(records[0]) == 1 && (strings.Contains(text, "\n\n") || strings.Contains(text, "\n\r\n")) {
			return // a blank line is an empty cell of the one column
		}
		if err != nil {
			if strings.Contains(err.Error(), "UTF-8") {
				return
			}
			t.Fatalf("%v, but the standard library reads %q", err, records)
		}
		if len(lines) != len(records)-1 {
			t.Fatalf("%d rows, the standard library reads %d", len(lines), len(records)-1)
		}
		for i, record := range records[1:] {
			for j, want := range record {
				// Line breaks inside quotes stay as they are written here.
				if got := strings.ReplaceAll(columns[j][i], "\r\n", "\n"); got != want {
					t.Fatalf("row %d, column %d: %q, the standard library reads %q", i, j, got, want)
				}
			}
		}
	})
}

// numbers is a CSV text of that many rows and columns of decimals.
func numbersCSV(rows, columns int) string {
	r := rand.New(rand.NewPCG(1, 2))
	var b strings.Builder
	for j := range columns {
		if j > 0 {
			b.WriteByte(',')
		}
		fmt.Fprintf(&b, "x%d", j)
	}
	b.WriteByte('\n')
	for range rows {
		for j := range columns {
			if j > 0 {
				b.WriteByte(',')
			}
			b.WriteString(strconv.FormatFloat(math.Round(r.NormFloat64()*1e4)/1e4, 'f', -1, 64))
		}
		b.WriteByte('\n')
	}
	return b.String()
}

// BenchmarkTable reads a million rows of six decimals and converts them, with
// the standard library's reader beside it.
func BenchmarkTable(b *testing.B) {
	text := numbersCSV(1_000_000, 6)
	b.Run("own", func(b *testing.B) {
		b.SetBytes(int64(len(text)))
		for b.Loop() {
			columns, err := readCSV(text, MaxRows)
			if err != nil || columns[5].Rows() != 1_000_000 {
				b.Fatal(err)
			}
		}
	})
	b.Run("standard", func(b *testing.B) {
		b.SetBytes(int64(len(text)))
		for b.Loop() {
			r := csv.NewReader(strings.NewReader(text))
			r.ReuseRecord = true
			total := 0.0
			for {
				record, err := r.Read()
				if err != nil {
					break
				}
				for _, s := range record {
					x, _ := strconv.ParseFloat(s, 64)
					total += x
				}
			}
			if total == 0 {
				b.Fatal("nothing read")
			}
		}
	})
}
