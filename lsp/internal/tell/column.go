package tell

import (
	"fmt"
	"math"

	"wellposed/parser/model"
)

// column says what is in a column: count, range, zeros, missing, levels. It
// shows no single row.
func column(c *model.Column) string {
	name := c.Name
	if c.Table != nil {
		name = c.Table.Name + "." + c.Name
	}
	rows, missing, zeros := c.Rows(), 0, 0
	low, high := math.Inf(1), math.Inf(-1)
	for i := range rows {
		if c.Missing != nil && c.Missing[i] {
			missing++
			continue
		}
		if c.Floats == nil || !c.Numeric {
			continue
		}
		x := c.Floats[i]
		low, high = min(low, x), max(high, x)
		if x == 0 {
			zeros++
		}
	}
	text := fmt.Sprintf("**column** `%s`: %d values", name, rows-missing)
	if missing > 0 {
		text += fmt.Sprintf(", %d missing", missing)
	}
	if c.Numeric && rows > missing {
		text += fmt.Sprintf(", from %g to %g", low, high)
		if zeros > 0 {
			text += fmt.Sprintf(", %d of them 0", zeros)
		}
	}
	if len(c.Levels) > 0 {
		text += fmt.Sprintf("; %d levels: %s", len(c.Levels), some(c.Levels))
	}
	return text
}
