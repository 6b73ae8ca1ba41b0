package main

import (
	"bytes"
	"io"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/spf13/cobra"
)

// Every command has a help that fits a terminal of 80 columns, with an example that names the command.
func TestHelpOfEveryCommand(t *testing.T) {
	var look func(c *cobra.Command)
	seen := 0
	look = func(c *cobra.Command) {
		if c.Name() == "help" || c.Name() == "completion" {
			return
		}
		seen++
		var out bytes.Buffer
		if code := run(append(strings.Fields(c.CommandPath())[1:], "--help"), streams{in: strings.NewReader(""), out: &out, err: io.Discard}); code != exitDone {
			t.Errorf("%s --help: code %d", c.CommandPath(), code)
		}
		for _, line := range strings.Split(out.String(), "\n") {
			if n := utf8.RuneCountInString(line); n > helpWidth && !strings.Contains(line, "  tautbook ") {
				t.Errorf("%s --help: a line of %d columns: %s", c.CommandPath(), n, line)
			}
		}
		if c.HasParent() && !strings.Contains(c.Example, c.CommandPath()) {
			t.Errorf("%s has no example", c.CommandPath())
		}
		for _, sub := range c.Commands() {
			look(sub)
		}
	}
	look(newRoot(streams{in: strings.NewReader(""), out: io.Discard, err: io.Discard}))
	if seen < 4 {
		t.Errorf("only %d commands looked at", seen)
	}
}
