package main

import (
	"bufio"
	"fmt"
	"io"
	"strings"
)

// writeDXF writes the fitted curves as three-dimensional polylines in metres, one layer a cable: the entities section of DXF R12 (group
// codes 0, 8, 10, 20, 30, 66, 70), which every drawing program reads.
func writeDXF(w io.Writer, spans []placedSpan) error {
	out := bufio.NewWriter(w)
	group := func(code int, value string) { fmt.Fprintf(out, "%3d\n%s\n", code, value) }
	at := func(p [3]float64) {
		for i, x := range p {
			group(10*(i+1), fmt.Sprintf("%.5f", x))
		}
	}
	group(0, "SECTION")
	group(2, "ENTITIES")
	for _, sp := range spans {
		layer := layerName(sp.result.Cable + " " + sp.visit.Date)
		group(0, "POLYLINE")
		group(8, layer)
		group(66, "1")
		group(70, "8")
		at([3]float64{})
		for _, p := range sp.curve {
			group(0, "VERTEX")
			group(8, layer)
			at(p)
			group(70, "32")
		}
		group(0, "SEQEND")
		group(8, layer)
	}
	group(0, "ENDSEC")
	group(0, "EOF")
	return out.Flush()
}

// layerName is a name that R12 takes: letters, digits, - and _, at most 31.
func layerName(name string) string {
	name = strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-':
			return r
		}
		return '_'
	}, strings.TrimSpace(name))
	return strings.ToUpper(name[max(0, len(name)-31):])
}
