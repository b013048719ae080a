package main

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"time"

	"github.com/spf13/cobra"
	"golang.org/x/term"

	"lotproof/report"
	"lotproof/runner"
	"lotproof/runner/record"
)

func runCommand(verdict *bool) *cobra.Command {
	var out string
	var workers int
	var asJSON bool
	c := &cobra.Command{
		Use:   "run PLAN",
		Short: "Carry out a plan and write record, workbook and appendix into a new numbered folder",
		Args:  one("plan"),
	}
	c.Flags().StringVar(&out, "out", "", "folder that holds the runs of all studies (default: runs beside the plan)")
	c.Flags().IntVar(&workers, "workers", 0, "how many resamples are drawn at once; no influence on results "+
		"(default: one a processor)")
	c.Flags().BoolVar(&asJSON, "json", false, "print the run record instead of the table")
	c.RunE = func(c *cobra.Command, args []string) error {
		started := time.Now()
		if err := checkWorkers(workers); err != nil {
			return err
		}
		study, err := prepare(args[0])
		if err != nil {
			return err
		}
		results, err := draw(c.Context(), study, workers, c.ErrOrStderr())
		if err != nil {
			return err
		}
		if out == "" {
			out = filepath.Join(filepath.Dir(args[0]), "runs")
		}
		folder, err := reserve(filepath.Join(out, study.Plan.Study.ID))
		if err != nil {
			return err
		}
		defer folder.drop()
		rec, err := record.New(results, record.Run{Number: folder.number, Started: stamp(started), Finished: stamp(time.Now()),
			System: runtime.GOOS + "/" + runtime.GOARCH, Go: runtime.Version()})
		if err != nil {
			return err
		}
		files, err := write(rec, study)
		if err != nil {
			return err
		}
		for _, f := range files {
			if err := folder.add(f.name, f.content); err != nil {
				return err
			}
		}
		if err := c.Context().Err(); err != nil {
			return err
		}
		at, err := folder.publish()
		if err != nil {
			return err
		}
		*verdict = results.Verdict == runner.NotMet || results.Verdict == runner.NotShown
		if asJSON {
			err = rec.Write(c.OutOrStdout())
		} else {
			err = report.Decisions(c.OutOrStdout(), rec, filepath.ToSlash(at))
		}
		if err != nil {
			return fmt.Errorf("the run is complete in %s, but could not be printed: "+
				"%w", filepath.ToSlash(at), reason(err))
		}
		return nil
	}
	return c
}

// draw carries out the plan and shows progress on a terminal.
func draw(ctx context.Context, study *runner.Study, workers int, stderr io.Writer) (*record.Results, error) {
	options := runner.Options{Workers: workers}
	file, ok := stderr.(*os.File)
	if ok && term.IsTerminal(int(file.Fd())) && os.Getenv("TERM") != "dumb" {
		shown := time.Now()
		options.Progress = func(done, total int) { // called by one worker at a time
			if time.Since(shown) > 200*time.Millisecond {
				shown = time.Now()
				fmt.Fprintf(stderr, "\r%d of %d resamples", done, total)
			}
		}
		defer fmt.Fprint(stderr, "\r                                                  \r")
	}
	return study.Run(ctx, options)
}

func stamp(t time.Time) string { return t.UTC().Format(time.RFC3339) }

// A file of a run folder.
type file struct {
	name    string
	content []byte
}

// The files of a run folder.
const (
	recordFile   = "record.json"
	workbookFile = "results.xlsx"
	appendixFile = "appendix.pdf"
	planFile     = "plan.yaml"
)

// write makes every file of a run.
func write(rec *record.Record, study *runner.Study) ([]file, error) {
	var files []file
	for _, f := range []struct {
		name  string
		write func(io.Writer) error
	}{
		{recordFile, rec.Write},
		{workbookFile, func(w io.Writer) error { return report.Workbook(w, rec, study.Data) }},
		{appendixFile, func(w io.Writer) error { return report.Appendix(w, rec, study.Data) }},
		{planFile, func(w io.Writer) error { _, err := io.WriteString(w, rec.Results.Plan.Text); return err }},
	} {
		var b bytes.Buffer
		if err := f.write(&b); err != nil {
			return nil, fmt.Errorf("making %s: %w", f.name, err)
		}
		files = append(files, file{f.name, b.Bytes()})
	}
	return files, nil
}
