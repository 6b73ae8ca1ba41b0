package main

import (
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strconv"

	"github.com/spf13/cobra"

	"tautbook/survey/register"
	"tautbook/tension"
)

const exportHelp = `Writes the register into a new folder of plain CSV files with the surveys as received: it outlives the program, opens in a
spreadsheet, and "register import" makes the same register of it.

With --format something for another program is written into one file instead: geojson (the spans as lines with their
figures), points (the fitted curves as CSV points) or dxf (the fitted curves as polylines). Coordinates are those of the
survey, in metres: easting, northing, elevation; they are not longitude and latitude. Surveys of two columns have no place
and are left out of these, which is said.`

// curveSteps is the number of stretches that a curve is written in.
const curveSteps = 100

func newRegisterExport(s streams, f *registerFlag) *cobra.Command {
	var format string
	cmd := &cobra.Command{
		Use:     "export FOLDER|FILE",
		Short:   "Write the register as plain files, or its curves",
		Long:    exportHelp,
		Example: "  tautbook register export register-2026-06\n  tautbook register export --format dxf curves.dxf",
		Args:    exactly(1, "one new folder, or a file with --format"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return withRegister(cmd, *f, func(reg *register.Register) error {
				print := map[string]func(io.Writer, []placedSpan) error{"geojson": writeGeoJSON, "points": writeCurvePoints, "dxf": writeDXF}[format]
				switch {
				case format == "csv":
					return reg.Export(cmd.Context(), args[0])
				case print == nil:
					return usageError{fmt.Errorf("--format is %q, expected csv, geojson, points or dxf", format)}
				}
				spans, err := placedSpans(cmd, reg, s)
				if err != nil {
					return err
				}
				return writeFile(args[0], func(w io.Writer) error { return print(w, spans) })
			})
		},
	}
	cmd.Flags().StringVar(&format, "format", "csv", "csv (a folder with everything), geojson, points or dxf")
	return cmd
}

// placedSpan is one span of one visit with points along its fitted curve.
type placedSpan struct {
	visit  register.Visit
	result register.Result
	curve  [][3]float64 // easting, northing, elevation, m
}

// placedSpans works out the curves of all visits that count.
func placedSpans(cmd *cobra.Command, reg *register.Register, s streams) (out []placedSpan, err error) {
	visits, err := visitsNamed(cmd, reg, nil)
	if err != nil {
		return nil, err
	}
	show := progressOf(s, "visit")
	for i, v := range visits {
		show(i, len(visits))
		in, cables, settings, err := reg.Stored(cmd.Context(), v)
		if err != nil {
			return nil, err
		}
		j, err := judgeStored(in, cables, settings)
		if err != nil {
			return nil, fmt.Errorf("visit %s: %w", v.ID, err)
		}
		for k, r := range j.results {
			if r.Place.StartEasting == nil {
				fmt.Fprintf(s.err, "tautbook: visit %s, cable %s: left out, a survey of stations and elevations has no place\n", v.ID, r.Cable)
				continue
			}
			out = append(out, placedSpan{v, r, curveOf(j.assessments[k], r.Place)})
		}
	}
	show(len(visits), len(visits))
	return out, nil
}

// curveOf is points along the fitted curve in the frame of the survey.
func curveOf(a tension.Assessment, p register.Place) (out [][3]float64) {
	sin, cos := math.Sincos(*p.AzimuthDeg * math.Pi / 180)
	for i := range curveSteps + 1 {
		s := *p.From + (*p.To-*p.From)*float64(i)/curveSteps
		out = append(out, [3]float64{*p.StartEasting + s*sin, *p.StartNorthing + s*cos, a.Drawing.Curve.Z(s)})
	}
	return out
}

// writeGeoJSON writes the spans as lines with their figures (RFC 7946, with coordinates by prior arrangement: see its section 4).
func writeGeoJSON(w io.Writer, spans []placedSpan) error {
	type feature struct {
		Type       string         `json:"type"`
		ID         string         `json:"id"`
		Geometry   map[string]any `json:"geometry"`
		Properties map[string]any `json:"properties"`
	}
	features := []feature{}
	for _, sp := range spans {
		r, v := sp.result, sp.visit
		features = append(features, feature{"Feature", v.ID + "/" + r.Cable + "/" + r.Span,
			map[string]any{"type": "LineString", "coordinates": [][3]float64{sp.curve[0], sp.curve[curveSteps]}},
			map[string]any{"visit": v.ID, "structure": v.Structure, "cable": r.Cable, "span": r.Span, "visit_date": v.Date, "verdict": r.Verdict,
				"horizontal_tension_N": r.HorizontalTension, "ratio": r.Ratio, "sag_mid_m": r.SagMid, "loads": v.Loads}})
	}
	enc := json.NewEncoder(w)
	enc.SetIndent("", "  ")
	return enc.Encode(map[string]any{"type": "FeatureCollection", "features": features,
		"coordinates": "easting, northing, elevation in the frame of the survey, m; not longitude and latitude"})
}

// writeCurvePoints writes the fitted curves point by point.
func writeCurvePoints(w io.Writer, spans []placedSpan) error {
	cw := csv.NewWriter(w)
	if err := cw.Write([]string{"visit", "structure", "cable", "span", "visit_date", "easting_m", "northing_m", "elevation_m"}); err != nil {
		return err
	}
	for _, sp := range spans {
		for _, p := range sp.curve {
			row := []string{sp.visit.ID, register.Guarded(sp.visit.Structure), register.Guarded(sp.result.Cable), register.Guarded(sp.result.Span), sp.visit.Date}
			for _, x := range p {
				row = append(row, strconv.FormatFloat(x, 'f', 5, 64))
			}
			if err := cw.Write(row); err != nil {
				return err
			}
		}
	}
	cw.Flush()
	return cw.Error()
}
