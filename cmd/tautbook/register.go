package main

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"tautbook/survey/register"
)

const registerHelp = `The register holds structures, cables, design versions, visits with their surveys as received, readings, events and results,
in one SQLite file (register.db in this folder, --register names another) or in PostgreSQL (--register postgres://...).
Several people may record at once. Other programs can query the view current_results.`

func newRegister(s streams) *cobra.Command {
	var f registerFlag
	cmd := &cobra.Command{
		Use:     "register",
		Short:   "Export, import, back up and judge again the register of visits",
		Long:    registerHelp,
		Example: "  tautbook register export register-2026-06\n  tautbook register backup register-2026-06.db",
		Args:    exactly(0, "export, import, backup or judge"),
		RunE:    func(cmd *cobra.Command, _ []string) error { return cmd.Help() },
	}
	cmd.PersistentFlags().StringVar(&f.register, "register", "register.db", "the register: an SQLite file, or a postgres:// URL")
	cmd.AddCommand(newRegisterExport(s, &f), &cobra.Command{
		Use:     "import FOLDER",
		Short:   "Add a folder that \"register export\" wrote",
		Long:    "Adds everything of an exported folder, whole or not at all. Rows that are on record are recognised; one with the same key and other content is refused.",
		Example: "  tautbook register import register-2026-06",
		Args:    exactly(1, "one folder"),
		RunE: func(cmd *cobra.Command, args []string) error {
			reg, err := f.open(cmd, register.Options{Create: true})
			if err != nil {
				return err
			}
			defer reg.Close()
			n, err := reg.Import(cmd.Context(), args[0])
			if err == nil {
				fmt.Fprintf(s.out, "%d rows added, %d on record already\n", n.Added, n.Known)
			}
			return err
		},
	}, &cobra.Command{
		Use:     "backup FILE",
		Short:   "Copy an SQLite register while it is in use",
		Long:    "Writes a copy of one moment into a new file, which is a register itself. Others may go on recording.",
		Example: "  tautbook register backup register-2026-06.db",
		Args:    exactly(1, "one new file"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return withRegister(cmd, f, func(reg *register.Register) error { return reg.Backup(cmd.Context(), args[0]) })
		},
	}, newRegisterJudge(s, &f))
	return cmd
}

const judgeHelp = `Judges visits on record by another cables file and records the results beside the earlier ones, which stay. Without ids every
visit that was not superseded is judged. "visits show" prints both.`

func newRegisterJudge(s streams, f *registerFlag) *cobra.Command {
	var cables string
	cmd := &cobra.Command{
		Use:     "judge [VISIT...]",
		Short:   "Judge visits on record by new design values",
		Long:    judgeHelp,
		Example: "  tautbook register judge --cables cables-2027.csv\n  tautbook register judge --cables cables-2027.csv 3fa2",
		RunE: func(cmd *cobra.Command, ids []string) error {
			if cables == "" {
				return usageError{errors.New("name the design values: --cables")}
			}
			return judgeVisits(cmd, *f, cables, ids, s)
		},
	}
	cmd.Flags().StringVar(&cables, "cables", "", "the design values to judge by")
	return cmd
}

func judgeVisits(cmd *cobra.Command, f registerFlag, cables string, ids []string, s streams) error {
	data, err := os.ReadFile(cables)
	if err != nil {
		return fmt.Errorf("cannot read the cables file: %w", err)
	}
	design := register.File{Kind: register.CablesFile, Name: filepath.Base(cables), Bytes: data}
	reg, err := f.open(cmd, register.Options{Now: s.now})
	if err != nil {
		return err
	}
	defer reg.Close()
	visits, err := visitsNamed(cmd, reg, ids)
	if err != nil {
		return err
	}
	var problems []error
	for _, v := range visits {
		if err := judgeOne(cmd, reg, v, design, s); err != nil {
			problems = append(problems, fmt.Errorf("visit %s: %w", v.ID, err))
		}
	}
	return errors.Join(problems...)
}

func judgeOne(cmd *cobra.Command, reg *register.Register, v register.Visit, design register.File, s streams) error {
	in, _, settings, err := reg.Stored(cmd.Context(), v)
	if err != nil {
		return err
	}
	j, err := judgeStored(in, &design, settings)
	if err != nil {
		return err
	}
	added, err := reg.Rejudge(cmd.Context(), v, design, j.designs, j.results, version())
	if err != nil {
		return err
	}
	word := "judged"
	if !added {
		word = "judged by this design already"
	}
	fmt.Fprintf(s.out, "%s  %s %s: %s\n", v.ID, v.Structure, v.Date, word)
	for _, r := range j.results {
		fmt.Fprintf(s.out, "  %s\n", resultLine(r))
	}
	return nil
}

// visitsNamed are the visits of some ids, or all that count.
func visitsNamed(cmd *cobra.Command, reg *register.Register, ids []string) (out []register.Visit, err error) {
	if len(ids) == 0 {
		all, err := reg.Visits(cmd.Context(), "")
		for _, v := range all {
			if v.SupersededBy == "" {
				out = append(out, v)
			}
		}
		return out, err
	}
	for _, id := range ids {
		v, err := reg.Visit(cmd.Context(), id)
		if err != nil {
			return nil, err
		}
		out = append(out, v)
	}
	return out, nil
}
