package main

import (
	"github.com/spf13/cobra"

	"tautbook/fieldsheets"
)

const checkHelp = `Says how each survey file was understood: encoding, separator, columns, units, codes and what they map to, points per cable
and span, supports found, guesses, and which flag changes each. It computes no tension.`

func newCheck(s streams) *cobra.Command {
	var reading readingFlags
	var structure string
	cmd := &cobra.Command{
		Use:   "check SURVEY...",
		Short: "How survey files are understood",
		Long:  checkHelp,
		Example: `  tautbook check main-left.csv
  tautbook check --order PNEZD --unit ft raw.txt
  tautbook check --code "MC1=main-left" --code "MC1A=main-left/A" points.csv`,
		Args: atLeastOne,
		RunE: func(_ *cobra.Command, files []string) error {
			in, err := reading.read(files, structure, s)
			if err != nil {
				return err
			}
			var understood []fieldsheets.SurveyFile
			var spans []fieldsheets.SpanCount
			for _, sv := range in.surveys {
				understood = append(understood, fieldsheets.NewSurveyFile(sv))
				spans = append(spans, fieldsheets.SpanCounts(sv, in.designs)...)
			}
			return fieldsheets.WriteUnderstanding(s.out, understood, spans, fieldsheets.TextOptions{Width: 80, Color: s.color})
		},
	}
	reading.bind(cmd)
	cmd.Flags().StringVar(&structure, "structure", "", "what is inspected")
	return cmd
}
