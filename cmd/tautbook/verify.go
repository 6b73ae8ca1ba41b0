package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"tautbook/survey/register"
)

const verifyHelp = `Reads every row of the register, holds stored files against their SHA-256, works every result out again from what is stored,
and names each damaged row and each difference. Exit 0 when there is none, 1 otherwise. It changes nothing.`

func newVerify(s streams) *cobra.Command {
	var f registerFlag
	cmd := &cobra.Command{
		Use:     "verify",
		Short:   "Check the register and work every result out again",
		Long:    verifyHelp,
		Example: "  tautbook verify\n  tautbook verify --register site/register.db",
		Args:    exactly(0, "flags only"),
		RunE: func(cmd *cobra.Command, _ []string) error {
			return withRegister(cmd, f, func(reg *register.Register) error { return runVerify(cmd, reg, s) })
		},
	}
	f.bind(cmd)
	return cmd
}

func runVerify(cmd *cobra.Command, reg *register.Register, s streams) error {
	show := progressOf(s, "visit")
	v, err := reg.Verify(cmd.Context(), judgeAgain, show)
	show(v.Visits, v.Visits)
	if err != nil {
		return err
	}
	for _, f := range v.Faults {
		fmt.Fprintln(s.out, f)
	}
	fmt.Fprintf(s.out, "%d visits, %d results, %d events, %d design rows, %d files: ", v.Visits, v.Results, v.Events, v.Designs, v.Files)
	if len(v.Faults) > 0 {
		fmt.Fprintf(s.out, "%d faults\n", len(v.Faults))
		return codeError(exitFailed)
	}
	fmt.Fprintln(s.out, "all as recorded")
	return nil
}
