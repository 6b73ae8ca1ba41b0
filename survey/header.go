package survey

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
)

// field is what a column of a point file holds.
type field int

const (
	fieldUnused field = iota
	fieldID
	fieldEasting
	fieldNorthing
	fieldElevation
	fieldStation
	fieldCode
	fieldUEasting
	fieldUNorthing
	fieldUElevation
	fieldCount
)

var fieldNames = [fieldCount]string{"not used", "id", "easting", "northing", "elevation", "station", "code", "u_easting", "u_northing", "u_elevation"}

// synonyms are the names that a header may use for each field, without blanks, dots, dashes and underscores, in lower case:
// common practice, no source. Single letters are read as the trade does: x is the easting.
var synonyms = map[field][]string{
	fieldID:        {"id", "point", "pointid", "pointno", "pointnumber", "pointname", "pt", "ptid", "ptno", "no", "nr", "number", "name", "punkt", "punktnr", "pkt"},
	fieldEasting:   {"e", "x", "east", "easting", "eastings", "xcoord", "xcoordinate", "coordx", "rechtswert", "est"},
	fieldNorthing:  {"n", "y", "north", "northing", "northings", "ycoord", "ycoordinate", "coordy", "hochwert", "nord"},
	fieldElevation: {"z", "h", "elev", "elevation", "height", "altitude", "level", "reducedlevel", "rl", "zcoord", "zcoordinate", "coordz", "höhe", "hoehe", "kote"},
	fieldStation:   {"s", "station", "sta", "chainage", "distance", "dist"},
	fieldCode:      {"code", "d", "desc", "description", "descriptor", "feature", "featurecode", "remark", "target"},
}

var uPrefixes = []string{"s", "sd", "u", "std", "stdev", "sigma", "standarddeviation"}

var headerFields = func() map[string]field {
	m := map[string]field{}
	for f, names := range synonyms {
		for _, n := range names {
			m[n] = f
		}
	}
	for f, names := range map[field][]string{fieldUEasting: {"e", "x", "east", "easting", "station"}, fieldUNorthing: {"n", "y", "north", "northing"},
		fieldUElevation: {"z", "h", "elev", "elevation", "height"}} {
		for _, p := range uPrefixes {
			for _, n := range names {
				if _, taken := m[p+n]; !taken {
					m[p+n] = f
				}
			}
		}
	}
	return m
}()

// column is one column of a point file as understood.
type column struct {
	field  field
	name   string  // as written
	factor float64 // to metres; 0 when the unit is not written
	unit   string
}

// bare is a header name without what spelling varies.
func bare(name string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsSpace(r) || strings.ContainsRune("._-#:", r) {
			return -1
		}
		return unicode.ToLower(r)
	}, name)
}

// cutUnit parts `Elev [ft]` or `Elev (ft)`.
func cutUnit(cell string) (name, unitText string) {
	for _, pair := range []string{"[]", "()"} {
		if i := strings.IndexByte(cell, pair[0]); i >= 0 && strings.HasSuffix(cell, pair[1:]) {
			return strings.TrimSpace(cell[:i]), strings.TrimSpace(cell[i+1 : len(cell)-1])
		}
	}
	return cell, ""
}

// isHeader reports whether a row names coordinates: a height and something horizontal, and no number among its cells.
func isHeader(cells []string) bool {
	known, numbers := 0, 0
	for _, c := range cells {
		name, _ := cutUnit(c)
		if f, ok := headerFields[bare(name)]; ok && f >= fieldEasting {
			known++
		}
		if _, fault := parseNumber([]byte(c), '.'); fault == "" {
			numbers++
		} else if _, fault := parseNumber([]byte(c), ','); fault == "" {
			numbers++
		}
	}
	return numbers == 0 && (known >= 1 || len(cells) >= 2)
}

// namesPoint reports whether a header names all that a point needs.
func namesPoint(cells []string) bool {
	var has [fieldCount]bool
	for _, c := range cells {
		name, _ := cutUnit(c)
		has[headerFields[bare(name)]] = true
	}
	return has[fieldElevation] && (has[fieldStation] || has[fieldEasting] && has[fieldNorthing])
}

// readHeader maps the cells of a header row to fields.
func (p *PointReader) readHeader(cells []string) error {
	problem := &InputError{}
	place := func(col string, found, expected, mend string) {
		problem.add(Problem{File: p.opts.Name, Line: p.rec.line, Column: col, Found: found, Expected: expected, Mend: mend})
	}
	seen := map[field]string{}
	for _, c := range cells {
		name, unitText := cutUnit(c)
		col := column{name: c, unit: unitText}
		col.field = headerFields[bare(name)]
		if first, twice := seen[col.field]; twice && col.field != fieldUnused {
			place(c, "", "one column for the "+fieldNames[col.field], fmt.Sprintf("columns %s and %s both name it: rename one, for example to \"unused\"", quote(first), quote(c)))
		}
		seen[col.field] = c
		if unitText != "" && col.field != fieldUnused && col.field != fieldID && col.field != fieldCode {
			u, ok := findUnit(unitText, Length)
			if !ok {
				place(c, unitText, "a unit of length ("+spellings[Length]+")", "")
			}
			col.factor = u.factor
		}
		p.columns = append(p.columns, col)
	}
	p.checkFields(seen, place)
	if _, written := seen[fieldEasting]; written && strings.HasPrefix(bare(seen[fieldEasting]), "x") {
		p.guess("axes", "x is the easting, y the northing", "the header says "+quote(seen[fieldEasting])+" and "+quote(seen[fieldNorthing]), "a header with easting and northing")
	}
	return problem.orNil()
}

// checkFields refuses a set of columns from which no point can be made.
func (p *PointReader) checkFields(seen map[field]string, place func(col, found, expected, mend string)) {
	has := func(f field) bool { _, ok := seen[f]; return ok }
	var missing []string
	if !has(fieldStation) {
		for _, f := range []field{fieldEasting, fieldNorthing} {
			if !has(f) {
				missing = append(missing, fieldNames[f])
			}
		}
	}
	if !has(fieldElevation) {
		missing = append(missing, "elevation")
	}
	if len(missing) > 0 {
		var known []string
		for _, f := range []field{fieldEasting, fieldNorthing, fieldElevation} {
			known = append(known, fieldNames[f]+": "+strings.Join(synonyms[f], ", "))
		}
		place("", strings.Join(p.names(), ", "), "columns for "+strings.Join(missing, ", "),
			"name them in the header (known names: "+strings.Join(known, "; ")+"), or, if there is no header, say --order")
		return
	}
	if has(fieldStation) && has(fieldEasting) {
		place("", "", "either station or easting and northing", "rename one of them, for example to \"unused\"")
	}
	u := []bool{has(fieldUEasting), has(fieldUNorthing), has(fieldUElevation)}
	if has(fieldStation) && u[2] && !u[0] {
		p.guess("accuracy of the station", "exact", "the file gives a standard deviation for the elevation alone", "a column u_station")
	}
	if has(fieldStation) && u[0] && !u[2] {
		place("", "", "a standard deviation for the elevation beside that of the station", "")
	}
	if slices.Contains(u, true) && slices.Contains(u, false) && !has(fieldStation) {
		place("", "", "standard deviations for easting, northing and elevation, or for none", "")
	}
}

func (p *PointReader) names() (out []string) {
	for _, c := range p.columns {
		out = append(out, c.name)
	}
	return out
}

// orderLetters are the letters of --order, after the trade's P,N,E,Z,D.
var orderLetters = map[rune]field{'P': fieldID, 'N': fieldNorthing, 'E': fieldEasting, 'Z': fieldElevation, 'D': fieldCode, 'S': fieldStation, '-': fieldUnused}

// useOrder maps the columns of a headerless file by letters.
func (p *PointReader) useOrder(order string, cells int) error {
	seen := map[field]string{}
	for _, r := range strings.ToUpper(strings.ReplaceAll(order, ",", "")) {
		f, ok := orderLetters[r]
		if _, twice := seen[f]; !ok || (twice && f != fieldUnused) {
			return fmt.Errorf("--order: found %s, expected letters P (point id), N (northing), E (easting), Z (elevation), S (station), D (code) or - (not used), each once", quote(order))
		}
		seen[f] = string(r)
		p.columns = append(p.columns, column{field: f})
	}
	problem := &InputError{}
	place := func(col, found, expected, mend string) {
		problem.add(Problem{File: p.opts.Name, Line: p.rec.line, Expected: expected + " in --order", Found: order, Mend: ""})
	}
	p.checkFields(seen, place)
	if err := problem.orNil(); err != nil {
		return err
	}
	if last := len(p.columns) - 1; cells == last && p.columns[last].field == fieldCode {
		p.columns = p.columns[:last] // the description is often left out
	}
	return nil
}
