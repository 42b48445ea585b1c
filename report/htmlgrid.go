package report

// grid is a table of the page: its columns have heads, its first column names
// the rows.
type grid struct {
	Caption string
	Wide    bool // more columns than a phone is wide: it scrolls there instead of being stacked
	Notes   []string
	Columns []column
	Rows    int
	Sums    int // of the rows, the last so many sum up the others
}

// column is a head and the cell that each row has under it.
type column struct {
	Head   string
	Class  string // "number", "words" or ""
	Cell   func(row int) string
	Symbol func(row int) mark // in place of Cell
}

// Lines are the rows with their cells, for the template.
func (g grid) Lines() []line {
	rows := make([]line, g.Rows)
	for i := range rows {
		rows[i].Sum = i >= g.Rows-g.Sums
		for _, c := range g.Columns {
			x := cell{Head: c.Head, Class: c.Class}
			if c.Symbol != nil {
				m := c.Symbol(i)
				x.Mark = &m
			} else {
				x.Text = c.Cell(i)
			}
			rows[i].Cells = append(rows[i].Cells, x)
		}
	}
	return rows
}

type line struct {
	Sum   bool
	Cells []cell
}

type cell struct {
	Head, Class, Text string
	Mark              *mark
}

// texts is a column of plain text.
func texts(head, class string, of func(int) string) column {
	return column{Head: head, Class: class, Cell: of}
}

// addFilled appends the columns that say something in at least one row.
func (g *grid) addFilled(columns ...column) {
	for _, c := range columns {
		for i := 0; i < g.Rows; i++ {
			if c.Symbol != nil || c.Cell(i) != "" {
				g.Columns = append(g.Columns, c)
				break
			}
		}
	}
}
