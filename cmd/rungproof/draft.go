package main

import (
	_ "embed"
	"errors"
	"fmt"
	"io/fs"
	"os"

	"github.com/spf13/cobra"
)

//go:embed draft.toml
var draftPlan []byte

func draftCommand(s *streams) *cobra.Command {
	return &cobra.Command{
		Use:   "draft [FILE]",
		Short: "write a commented plan to start from",
		Long: `Writes a commented test plan to FILE (plan.toml if left out, standard output
for -). The plan is complete: change what differs on your bench. A file that is
there is never overwritten.`,
		Example: "  rungproof draft weir.toml",
		Args:    atMost(1, "FILE"),
		RunE: func(_ *cobra.Command, args []string) error {
			name := "plan.toml"
			if len(args) == 1 {
				name = args[0]
			}
			if name == "-" {
				_, err := s.out.Write(draftPlan)
				return err
			}
			return s.createNew(name, draftPlan)
		},
	}
}

// createNew writes a file that must not be there yet.
func (s *streams) createNew(name string, content []byte) error {
	f, err := os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o644)
	if errors.Is(err, fs.ErrExist) {
		return hinted{name + " is there already and is not overwritten", "name another file, or - for standard output"}
	}
	if err != nil {
		return fileError(name, err)
	}
	_, err = f.Write(content)
	if closed := f.Close(); err == nil {
		err = closed
	}
	if err != nil {
		os.Remove(name)
		return fileError(name, err)
	}
	fmt.Fprintf(s.err, "wrote %s; next: rungproof expect %s\n", name, name)
	return nil
}
