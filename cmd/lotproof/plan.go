package main

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"lotproof/runner"
	"lotproof/spec"
)

// prepare reads a plan and its data.
func prepare(file string) (*runner.Study, error) {
	text, err := os.ReadFile(file)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, usage{fmt.Sprintf("there is no plan %s; name a file that exists", file)}
	case err != nil:
		if info, other := os.Stat(file); other == nil && info.IsDir() {
			return nil, usage{fmt.Sprintf("%s is a folder; name the plan in it", file)}
		}
		return nil, fmt.Errorf("cannot read %s: %w", file, reason(err))
	}
	plan, err := spec.Read(bytes.NewReader(text), file, runner.Catalogue())
	if err != nil {
		return nil, err
	}
	return runner.Prepare(plan, filepath.Dir(file))
}

// checkWorkers refuses a number of workers that makes no sense.
func checkWorkers(workers int) error {
	if workers < 0 {
		return usage{fmt.Sprintf("--workers %d: write a whole number from 1, or leave it out", workers)}
	}
	return nil
}

// reason takes the operation and the path off an error of the file system; the caller says both in its own words.
func reason(err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}
