package main

import (
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/cobra/doc"
)

// helpWidth is the width of help on a terminal.
const helpWidth = 80

// narrow folds the help of a command and of all below it to the width of a terminal. Lines that start with a blank are examples or
// lists and stay as they are.
func narrow(cmd *cobra.Command) {
	cmd.Long = folded(cmd.Long)
	usage := cmd.UsageTemplate()
	for _, flags := range []string{"LocalFlags", "InheritedFlags"} {
		usage = strings.ReplaceAll(usage, "."+flags+".FlagUsages ", fmt.Sprintf(".%s.FlagUsagesWrapped %d ", flags, helpWidth))
	}
	cmd.SetUsageTemplate(usage)
	for _, c := range cmd.Commands() {
		narrow(c)
	}
}

// folded joins the lines of every paragraph and parts them again.
func folded(text string) string {
	var out []string
	line := ""
	end := func() {
		if line != "" {
			out = append(out, line)
			line = ""
		}
	}
	for _, l := range strings.Split(text, "\n") {
		if l == "" || l[0] == ' ' {
			end()
			out = append(out, l)
			continue
		}
		for _, word := range strings.Fields(l) {
			switch {
			case line == "":
				line = word
			case len(line)+1+len(word) > helpWidth:
				end()
				line = word
			default:
				line += " " + word
			}
		}
	}
	end()
	return strings.Join(out, "\n")
}

const manualHelp = `Writes one manual page for every command into a folder, for "man": the help of the commands in the form that manual pages
have.`

func newManual(s streams) *cobra.Command {
	return &cobra.Command{
		Use:   "manual FOLDER",
		Short: "Manual pages of every command",
		Long:  manualHelp,
		Example: `  tautbook manual man1
  man man1/tautbook-assess.1`,
		Args: func(_ *cobra.Command, args []string) error {
			if len(args) != 1 {
				return usageError{fmt.Errorf("found %d folders, expected one for the pages", len(args))}
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, args []string) error { return writeManual(cmd.Root(), args[0], s.err) },
	}
}

// writeManual prints a page for the command and for all below it that have a help of their own.
func writeManual(root *cobra.Command, dir string, progress io.Writer) error {
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return fmt.Errorf("cannot make the folder of the manual: %w", err)
	}
	count := 0
	var page func(c *cobra.Command) error
	page = func(c *cobra.Command) error {
		name := strings.ReplaceAll(c.CommandPath(), " ", "-")
		header := &doc.GenManHeader{Title: strings.ToUpper(name), Section: "1", Source: "tautbook " + version(), Manual: "tautbook"}
		if err := writeFile(filepath.Join(dir, name+".1"), func(w io.Writer) error { return doc.GenMan(c, header, w) }); err != nil {
			return err
		}
		count++
		for _, sub := range c.Commands() {
			if !sub.IsAvailableCommand() || sub.IsAdditionalHelpTopicCommand() {
				continue
			}
			if err := page(sub); err != nil {
				return err
			}
		}
		return nil
	}
	if err := page(root); err != nil {
		return err
	}
	fmt.Fprintf(progress, "tautbook: %d manual pages in %s\n", count, dir)
	return nil
}
