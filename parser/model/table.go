package model

import (
	"math/big"

	"wellposed/parser/source"
)

// Table is a data table.
type Table struct {
	Name string
	Span source.Span
	// Path is the data file as written, empty for an inline table; FilePath is
	// the path it was read from.
	Path, FilePath string
	// Hash is the SHA-256 of the table's content with line ends normalised.
	Hash    string
	Columns []*Column
	Rows    int
}

// Column is one column of a table, or a given vector (Table is nil).
type Column struct {
	Name  string
	Table *Table
	// Span is the header cell of an inline table, or the given's name.
	Span source.Span
	// Index is the position in the table.
	Index int

	// Texts hold the cells as written, trimmed of outer blanks.
	Texts []string
	// Numeric is set when every cell that is not missing is a number.
	Numeric bool
	// Floats hold the nearest double of each cell; NaN where missing or no number.
	Floats []float64
	// Missing marks cells that are NA or empty; nil when none is.
	Missing []bool
	// Levels are the distinct texts in order of first appearance, Codes the
	// level of each row (-1 where missing). Made for every column that is used
	// as a level, nil otherwise.
	Levels []string
	Codes  []int32

	// Lines is the line in the data file of each row (from 1, the header is 1),
	// nil for a given vector.
	Lines []int32
	// Spans are the cells of an inline table or the items of a given vector, nil
	// for a data file.
	Spans []source.Span

	Awaited bool

	// shared is set when the bare name could mean something else too.
	shared bool
}

// Rows is the number of cells.
func (c *Column) Rows() int { return len(c.Texts) }

// Exact returns the value that the text of a cell says, nil when the cell is
// missing or is no number.
func (c *Column) Exact(row int) *big.Rat {
	if row < 0 || row >= len(c.Texts) {
		return nil
	}
	if x := ParseDecimal(c.Texts[row]); x != nil {
		return x
	}
	x, _ := fraction(c.Texts[row])
	return x
}
