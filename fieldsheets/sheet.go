package fieldsheets

import (
	"time"

	"tautbook/tension"
)

// Sheet is a printed sheet beside the condition summary: what to do on site, what to look for, what became of it. It holds words and
// printed figures only, so that text, HTML and PDF cannot differ. Every printer adds the cautions.
type Sheet struct {
	Title    string
	Facts    []Fact   // structure, cable, date: one line under the title
	Lead     []string // what matters most, first
	Sections []Section
	Signers  []string // who signs, nil for nobody
	Large    bool     // large type: to be read on site, in the rain
	Tool     Tool
	Printed  time.Time
}

// Fact is a figure or a word with its label.
type Fact struct{ Label, Value string }

// Section is one part of a sheet. What it holds is printed in the order of the fields; empty fields are left out.
type Section struct {
	Title    string
	NewPage  bool // on paper
	Text     []string
	Findings []tension.Finding
	Facts    []Fact
	Pictures []Drawn
	Table    *Table
	Ticks    []string // things to do, each with a box to tick
	Boxes    []string // things to write down, each with a line to write on
}

// Drawn is a drawing with its caption.
type Drawn struct {
	Caption string
	drawing *svg
}

// Table is printed with its head repeated on every page.
type Table struct {
	Caption string
	Columns []Column
	Body    [][]string // as many cells a row as there are columns
	Strong  []int      // numbers of rows that are printed in bold
}

// Column is one column of a table.
type Column struct {
	Head  string
	Right bool // figures: set flush right
	Blank bool // to write into or to tick: its cells are empty
}

// tickBox and writeLine stand for a box and a line in plain text.
const (
	tickBox   = "[ ]"
	writeLine = "________"
)

// cell is what stands in a cell of a column on a terminal.
func (c Column) cell(text string) string {
	if c.Blank {
		return writeLine
	}
	return cleanSentence(text)
}

// strong reports whether a row is printed in bold.
func (t *Table) strong(row int) bool {
	for _, i := range t.Strong {
		if i == row {
			return true
		}
	}
	return false
}
