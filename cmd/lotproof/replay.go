package main

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"

	"github.com/spf13/cobra"

	rng "lotproof/runner/draw"

	"lotproof/runner"
	"lotproof/runner/record"
	"lotproof/spec"
)

func replayCommand() *cobra.Command {
	var data string
	var workers int
	c := &cobra.Command{
		Use:   "replay RECORD",
		Short: "Run a record again and say whether every figure and every file agrees",
		Long: "Replay runs the plan that a record holds on the data that it names, and compares every figure to " +
			"the last bit and\n" +
			"the files of the run folder to the last byte. RECORD is record.json or the folder that holds it.",
		Args: one("record"),
	}
	c.Flags().StringVar(&data, "data", "", "folder of the data files (default: three folders above the record, "+
		"where the plan was)")
	c.Flags().IntVar(&workers, "workers", 0, "how many resamples are drawn at once; no influence on results "+
		"(default: one a processor)")
	c.RunE = func(c *cobra.Command, args []string) error {
		if err := checkWorkers(workers); err != nil {
			return err
		}
		r := &replay{out: &printer{w: c.OutOrStdout()}}
		if err := r.read(args[0], data); err != nil {
			return err
		}
		plan, err := spec.Read(strings.NewReader(r.record.Results.Plan.Text), r.record.Results.Plan.File, runner.Catalogue())
		if err != nil {
			return fmt.Errorf("the plan in the record cannot be run by this version: %w", err)
		}
		if err := r.sources(); err != nil {
			return err
		}
		study, err := runner.Prepare(plan, r.data)
		if err != nil {
			var mistakes spec.Errors
			if errors.As(err, &mistakes) && r.differs > 0 {
				fmt.Fprintln(c.ErrOrStderr(), mistakes)
				return r.end()
			}
			return err
		}
		results, err := draw(c.Context(), study, workers, c.ErrOrStderr())
		if err != nil {
			return err
		}
		if err := r.figures(results); err != nil {
			return err
		}
		if err := r.files(results, study); err != nil {
			return err
		}
		return r.end()
	}
	return c
}

// A replay compares a record with a new run and prints what it finds, a line each.
type replay struct {
	out     *printer
	record  *record.Record
	folder  string // of the record
	data    string
	differs int
}

func (r *replay) agrees(format string, args ...any) {
	fmt.Fprintf(r.out, "agrees   "+format+"\n", args...)
}

func (r *replay) differ(format string, args ...any) {
	r.differs++
	fmt.Fprintf(r.out, "DIFFERS  "+format+"\n", args...)
}

func (r *replay) remark(format string, args ...any) {
	fmt.Fprintf(r.out, "note     "+format+"\n", args...)
}

// read reads the record and says what it is.
func (r *replay) read(path, data string) error {
	if info, err := os.Stat(path); err == nil && info.IsDir() {
		path = filepath.Join(path, recordFile)
	}
	if strings.EqualFold(filepath.Ext(path), ".pdf") {
		return usage{"replay from the appendix is not available in this version; name the record.json of the run"}
	}
	f, err := os.Open(path)
	if errors.Is(err, fs.ErrNotExist) {
		return usage{fmt.Sprintf("there is no record %s; name a record.json or the folder that holds it", path)}
	}
	if err != nil {
		return fmt.Errorf("cannot read %s: %w", path, reason(err))
	}
	defer f.Close()
	rec, err := record.Read(f)
	switch {
	case errors.Is(err, record.ErrNotRecord), errors.Is(err, record.ErrVersion):
		return usage{fmt.Sprintf("%s: %v", path, err)}
	case errors.Is(err, record.ErrAltered):
		r.record = rec
	case err != nil:
		return fmt.Errorf("cannot read %s: %w", path, reason(err))
	}
	r.record = rec
	fmt.Fprintf(r.out, "Replay of study %s, run %d of %s\n", rec.Results.Plan.Study, rec.Run.Number, rec.Run.Started)
	if err != nil {
		r.differ("record: its bytes are not those that its digests stand for; it was changed after the run")
	}
	absolute, err := filepath.Abs(path)
	if err != nil {
		return err
	}
	r.folder = filepath.Dir(absolute)
	r.data = data
	if r.data == "" {
		r.data = filepath.Join(r.folder, "..", "..", "..")
	}
	if was := rec.Results.Program.Version; was != runner.Version {
		r.remark("the record was made by version %s, this is version %s", was, runner.Version)
	}
	if was := rec.Results.Program.Generator; was != rng.Generator {
		return usage{fmt.Sprintf("the record was made with the generator %q, which this version does not have", was)}
	}
	return nil
}

// sources compares the digests of the data files.
func (r *replay) sources() error {
	for _, s := range r.record.Results.Sources {
		content, err := os.ReadFile(filepath.Join(r.data, filepath.FromSlash(s.File)))
		if errors.Is(err, fs.ErrNotExist) {
			return usage{fmt.Sprintf("the data file %s is not where the plan was; name its folder with --data", s.File)}
		}
		if err != nil {
			return fmt.Errorf("cannot read %s: %w", s.File, reason(err))
		}
		sum := sha256.Sum256(content)
		if is := hex.EncodeToString(sum[:]); is != s.SHA256 {
			r.differ("source %s, file %s: SHA-256 was %s, is %s", s.Name, s.File, s.SHA256, is)
		} else {
			r.agrees("source %s, file %s, SHA-256 %s", s.Name, s.File, s.SHA256)
		}
	}
	return nil
}

// listed is how many differing figures are printed; the rest are counted.
const listed = 40

func (r *replay) figures(results *record.Results) error {
	list, err := record.Differences(&r.record.Results, results)
	if err != nil {
		return err
	}
	for i, d := range list {
		if i == listed {
			fmt.Fprintf(r.out, "         and %d more\n", len(list)-listed)
			break
		}
		r.differ("%s", d)
	}
	digest, err := results.Digest()
	if err != nil {
		return err
	}
	switch {
	case digest != r.record.ResultsSHA256:
		r.differ("results: digest was %s, is %s", r.record.ResultsSHA256, digest)
	case len(list) == 0:
		r.agrees("results: every figure of %d statistics to the last bit, digest %s", len(results.Statistics), digest)
	}
	return nil
}

// files compares the files of the run folder with what the new results give with the old run's number and times.
func (r *replay) files(results *record.Results, study *runner.Study) error {
	again, err := record.New(results, r.record.Run)
	if err != nil {
		return err
	}
	files, err := write(again, study)
	if err != nil {
		return err
	}
	for _, f := range files {
		was, err := os.ReadFile(filepath.Join(r.folder, f.name))
		switch {
		case errors.Is(err, fs.ErrNotExist):
			r.remark("%s is not beside the record and was not compared", f.name)
		case err != nil:
			return fmt.Errorf("cannot read %s: %w", f.name, reason(err))
		case bytes.Equal(was, f.content):
			r.agrees("%s, byte for byte", f.name)
		default:
			r.differ("%s: the file is not what the results give", f.name)
			if r.record.Run.Go != runtime.Version() {
				r.remark("it was written by a program built with %s, this one with %s; compressed files may differ "+
					"for that alone",
					r.record.Run.Go, runtime.Version())
			}
		}
	}
	return nil
}

func (r *replay) end() error {
	if r.out.err != nil {
		return fmt.Errorf("the replay could not be printed: %w", reason(r.out.err))
	}
	if r.differs > 0 {
		return difference{"the replay differs; see the lines above"}
	}
	if fmt.Fprintln(r.out, "Every figure and every digest agrees."); r.out.err != nil {
		return fmt.Errorf("the replay could not be printed: %w", reason(r.out.err))
	}
	return nil
}

// A printer remembers the first error of its writer, so that a full disk does not pass for success.
type printer struct {
	w   io.Writer
	err error
}

func (p *printer) Write(b []byte) (int, error) {
	if p.err != nil {
		return 0, p.err
	}
	n, err := p.w.Write(b)
	p.err = err
	return n, err
}
