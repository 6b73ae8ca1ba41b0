package fieldsheets

import "io"

// WriteHTML prints
func WriteHTML(w io.Writer, r Report) error { return nil }
