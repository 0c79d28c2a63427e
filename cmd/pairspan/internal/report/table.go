package report

// table is one table of the page; every table goes through one template.
type table struct {
	ID      string
	Caption string // what the table holds
	Quiet   bool   // the caption is read aloud only: a heading says it
	Head    []string
	Rows    []row
	Words   []bool // columns after the first that hold words, not numbers
	Stack   bool   // on a narrow screen each row becomes a block
	Wide    bool   // may need sideways scrolling inside its own frame
	Entries bool   // row headers are names of entries
}

// row is a row header and its cells; Cells[i] belongs to Head[i+1].
type row struct {
	Head  string
	Note  string // second line of the row header
	Cells []string
	Main  bool // the scenario as filed, or a sum
	Sub   bool // belongs to the row above
}

// add appends a row of figures.
func (t *table) add(head string, cells ...string) {
	t.Rows = append(t.Rows, row{Head: head, Cells: cells})
}

// Label returns the heading of cell i, for the narrow layout.
func (t *table) Label(i int) string {
	if i+1 < len(t.Head) {
		return t.Head[i+1]
	}
	return ""
}

// HeadNumber reports whether heading i stands over numbers.
func (t *table) HeadNumber(i int) bool { return i > 0 && t.Number(i-1) }

// Number reports whether column i after the first holds numbers.
func (t *table) Number(i int) bool { return i >= len(t.Words) || !t.Words[i] }
