package survey

import (
	"bufio"
	"bytes"
	"fmt"
	"io"
	"unicode/utf8"
)

// longestLine is the limit on one line, bytes; a longer one is no survey.
const longestLine = 1 << 20

// mostCells is the limit on the cells of one row; a survey has a dozen.
const mostCells = 4096

// endOfText is the character (Ctrl-Z) with which old instruments and editors close a text file.
const endOfText = 0x1a

// records splits text into lines and lines into cells. It keeps the number of the file's line, whatever the line ends, and
// hands out slices that are valid until the next record: nothing is allocated for a plain row.
type records struct {
	in        *bufio.Reader
	name      string
	separator byte // ',', ';', '\t' or ' ' for runs of blanks
	seconds   bool // a quote that does not open a cell is the sign of seconds
	returns   bool // lines end with a lone carriage return
	line      int  // of the record in hand
	next      int  // of the line to be read
	cells     [][]byte
	long      []byte // a line that does not lie whole in the buffer of in
	joined    []byte // a record whose quoted cell runs over lines
	unquoted  []byte
	ended     bool // the last line read had no line end
}

func newRecords(in *bufio.Reader, name string) *records {
	head, _ := in.Peek(headSize)
	return &records{in: in, name: name, next: 1, returns: !bytes.Contains(head, []byte("\n")) && bytes.Contains(head, []byte("\r"))}
}

// readLine is the next line without its end. At the end of the text it returns io.EOF.
func (r *records) readLine() ([]byte, error) {
	delim := byte('\n')
	if r.returns {
		delim = '\r'
	}
	line, err := r.in.ReadSlice(delim)
	if err == bufio.ErrBufferFull {
		r.long = append(r.long[:0], line...)
		for err == bufio.ErrBufferFull && len(r.long) <= longestLine {
			line, err = r.in.ReadSlice(delim)
			r.long = append(r.long, line...)
		}
		line = r.long
	}
	if len(line) > longestLine {
		return nil, &InputError{Problems: []Problem{{File: r.name, Line: r.next, Expected: "lines of at most 1 MiB", Mend: "this is not a survey, or its line ends are lost"}}}
	}
	if err != nil && (err != io.EOF || len(line) == 0) {
		return nil, err
	}
	r.ended = err == io.EOF
	r.next++
	line = bytes.TrimSuffix(line, []byte{delim})
	return bytes.TrimSuffix(line, []byte("\r")), nil
}

// stop makes every further read end.
func (r *records) stop() { r.in.Reset(bytes.NewReader(nil)) }

// fault is a problem of a line as a whole.
func (r *records) fault(expected, mend string) error {
	return &InputError{Problems: []Problem{{File: r.name, Line: r.line, Expected: expected, Mend: mend}}}
}

// read is the next record's cells; blank lines are passed over and comment lines handed to comment.
func (r *records) read(comment func(line int, text []byte)) ([][]byte, error) {
	for {
		r.line = r.next
		line, err := r.readLine()
		if err != nil {
			return nil, err
		}
		text := bytes.TrimSpace(line)
		if len(text) == 0 || text[0] == endOfText && len(text) == 1 {
			continue
		}
		if text[0] == '#' {
			if comment != nil {
				comment(r.line, text)
			}
			continue
		}
		if bytes.IndexByte(line, 0) >= 0 {
			return nil, r.fault("text", "the line holds NUL bytes: the file is damaged or is not text")
		}
		if !utf8.Valid(line) {
			return nil, r.fault("UTF-8", "the line holds other bytes: say --encoding windows-1252, or save the file as UTF-8")
		}
		if bytes.IndexByte(line, '"') < 0 || r.separator == ' ' || r.seconds && !r.opens(line) {
			if cells := r.split(line); len(cells) <= mostCells {
				return cells, nil
			}
			return nil, r.fault(fmt.Sprintf("at most %d cells in a row", mostCells), "this is not a survey, or its line ends are lost")
		}
		return r.quoted(line)
	}
}

// opens reports whether a quote opens a cell of the line.
func (r *records) opens(line []byte) bool {
	for len(line) > 0 {
		if line = bytes.TrimLeft(line, " "); len(line) > 0 && line[0] == '"' {
			return true
		}
		i := bytes.IndexByte(line, r.separator)
		if i < 0 {
			break
		}
		line = line[i+1:]
	}
	return false
}

// split parts a line without quotes.
func (r *records) split(line []byte) [][]byte {
	r.cells = r.cells[:0]
	if r.separator == ' ' {
		for _, f := range fields(line) {
			r.cells = append(r.cells, f)
		}
		return r.cells
	}
	for {
		i := bytes.IndexByte(line, r.separator)
		if i < 0 {
			r.cells = append(r.cells, trim(line))
			return r.cells
		}
		r.cells = append(r.cells, trim(line[:i]))
		line = line[i+1:]
	}
}

// fields yields runs of non-blanks.
func fields(line []byte) func(func(int, []byte) bool) {
	return func(yield func(int, []byte) bool) {
		n := 0
		for i := 0; i < len(line); {
			if line[i] == ' ' || line[i] == '\t' {
				i++
				continue
			}
			start := i
			for i < len(line) && line[i] != ' ' && line[i] != '\t' {
				i++
			}
			if !yield(n, line[start:i]) {
				return
			}
			n++
		}
	}
}

// trim takes blanks off a cell; most cells have none.
func trim(cell []byte) []byte {
	if len(cell) > 0 && cell[0] > ' ' && cell[len(cell)-1] > ' ' && cell[len(cell)-1] < utf8.RuneSelf && cell[0] < utf8.RuneSelf {
		return cell
	}
	return bytes.TrimSpace(cell)
}

// quoted parts a record with quoted cells by RFC 4180; a quoted cell may hold separators, doubled quotes and line ends.
func (r *records) quoted(line []byte) ([][]byte, error) {
	r.joined = append(r.joined[:0], line...)
	for quotes := bytes.Count(line, []byte{'"'}); quotes%2 == 1; {
		if len(r.joined) > longestLine {
			return nil, r.fault("a closing quote", "add it")
		}
		more, err := r.readLine()
		if err == io.EOF {
			return nil, r.fault("a closing quote before the end of the file", "add it, or take the single quote out")
		}
		if err != nil {
			return nil, err
		}
		r.joined = append(append(r.joined, '\n'), more...)
		quotes += bytes.Count(more, []byte{'"'})
	}
	r.cells, r.unquoted = r.cells[:0], r.unquoted[:0]
	rest := r.joined
	starts := []int{}
	for more := true; more; {
		cell := bytes.TrimLeft(rest, " ")
		starts = append(starts, len(r.unquoted))
		if len(cell) == 0 || cell[0] != '"' {
			i := bytes.IndexByte(rest, r.separator)
			if more = i >= 0; more {
				r.unquoted, rest = append(r.unquoted, trim(rest[:i])...), rest[i+1:]
			} else {
				r.unquoted = append(r.unquoted, trim(rest)...)
			}
			continue
		}
		cell = cell[1:]
		for {
			i := bytes.IndexByte(cell, '"')
			if i < 0 {
				return nil, r.fault("quotes in pairs", "double a quote inside a quoted cell")
			}
			r.unquoted = append(r.unquoted, cell[:i]...)
			cell = cell[i+1:]
			if len(cell) == 0 || cell[0] != '"' {
				break
			}
			r.unquoted = append(r.unquoted, '"')
			cell = cell[1:]
		}
		cell = bytes.TrimLeft(cell, " ")
		switch {
		case len(cell) == 0:
			more = false
		case cell[0] == r.separator:
			rest = cell[1:]
		default:
			return nil, r.fault("a separator after a quoted cell", "double a quote inside a quoted cell")
		}
	}
	for i, start := range starts {
		end := len(r.unquoted)
		if i+1 < len(starts) {
			end = starts[i+1]
		}
		r.cells = append(r.cells, r.unquoted[start:end:end])
	}
	return r.cells, nil
}
