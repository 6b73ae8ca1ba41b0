package fieldsheets

import (
	"strings"
	"unicode"

	"golang.org/x/text/width"
)

// longestText is the number of characters after which a text from a file is cut on a sheet; JSON and CSV keep all of it.
const longestText = 120

// clean makes text from a file safe to show on one line: control characters, invisible format characters and direction marks
// become visible dots, bytes that are no text become U+FFFD, and what is very long is cut.
func clean(s string) string {
	s = strings.Map(func(r rune) rune {
		if unicode.In(r, unicode.Cc, unicode.Cf, unicode.Zl, unicode.Zp) || r == '\ufffe' || r == '\uffff' {
			return '·'
		}
		return r
	}, s)
	if runes := []rune(s); len(runes) > longestText {
		s = string(runes[:longestText]) + "…"
	}
	return s
}

// cleanSentence cleans word by word: sentences of this program may be long and may quote text from a file.
func cleanSentence(s string) string {
	list := strings.Fields(s)
	for i, w := range list {
		list[i] = clean(w)
	}
	return strings.Join(list, " ")
}

// harmless keeps a spreadsheet from taking text for a formula. Blanks and control characters before the sign do not hide it,
// and the full-width forms of the signs count: some spreadsheets read them as the plain ones.
func harmless(text string) string {
	rest := strings.TrimLeftFunc(text, func(r rune) bool { return unicode.IsSpace(r) || unicode.In(r, unicode.Cc, unicode.Cf) })
	if strings.HasPrefix(text, "\t") || strings.HasPrefix(text, "\r") || (rest != "" && strings.ContainsRune("=+-@＝＋－＠", []rune(rest)[0])) {
		return "'" + text
	}
	return text
}

// columns is the width of a text on a terminal: East Asian wide characters take two columns, marks that sit on another
// character take none.
func columns(s string) (n int) {
	for _, r := range s {
		switch k := width.LookupRune(r).Kind(); {
		case unicode.In(r, unicode.Mn, unicode.Me):
		case k == width.EastAsianWide || k == width.EastAsianFullwidth:
			n += 2
		default:
			n++
		}
	}
	return n
}

// padded fills a text with blanks up to a width in terminal columns.
func padded(s string, wide int) string { return s + strings.Repeat(" ", max(0, wide-columns(s))) }
