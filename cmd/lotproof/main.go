// Command lotproof carries out study plans: see README.md.
//
// This package talks to people and files: flags in, exit status out. It does no arithmetic on data.
package main

import (
	"context"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"

	"github.com/spf13/cobra"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	go func() {
		<-ctx.Done()
		stop() // a second interrupt ends the program at once, whatever it is doing
	}()
	status := run(ctx, os.Args[1:], os.Stdout, os.Stderr)
	stop()
	os.Exit(status)
}

// run carries out one command and returns the exit status; the statuses are listed once, in exit.go.
func run(ctx context.Context, args []string, stdout, stderr io.Writer) int {
	root := &cobra.Command{
		Use: "lotproof",
		Short: "Carry out a study plan: estimates, confidence limits by resampling, verdicts, and a record that " +
			"replays",
		Long: "Lotproof carries out a study plan written in YAML: it estimates, finds confidence limits by " +
			"resampling, judges\n" +
			"acceptance criteria, and writes a workbook, a method appendix and a run record that can be replayed.\n\n" +
			"Exit status: 0 done, every criterion met or none set; 1 done, a criterion is not met or not shown; 2 " +
			"the plan, the\n" +
			"data or the command line is wrong; 3 the program or the machine failed; 4 a replay differs.",
		SilenceUsage:  true,
		SilenceErrors: true,
		RunE: func(c *cobra.Command, _ []string) error {
			return usage{"a command is needed; see lotproof --help"}
		},
	}
	root.SetArgs(args)
	root.SetOut(stdout)
	root.SetErr(stderr)
	root.CompletionOptions.HiddenDefaultCmd = true
	root.SetFlagErrorFunc(func(_ *cobra.Command, err error) error {
		text, _, _ := strings.Cut(err.Error(), ": strconv.") // how the library found it out is nobody's business
		return usage{text}
	})
	var verdict bool
	root.AddCommand(runCommand(&verdict), checkCommand(), replayCommand(), catalogueCommand(), versionCommand())
	return status(root.ExecuteContext(ctx), verdict, stderr)
}
