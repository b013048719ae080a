package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
)

// A folder is the numbered folder of a run while it is being filled. It has a hidden name until it is complete, so that
// a run appears whole or not at all.
type folder struct {
	number         int
	hidden, public string
}

// reserve takes the next free number of a study. Two programs that run at once get two numbers: making the hidden folder
// fails for the second one.
func reserve(study string) (*folder, error) {
	if err := os.MkdirAll(study, 0o777); err != nil {
		return nil, fmt.Errorf("cannot make the folder %s: %w", study, reason(err))
	}
	entries, err := os.ReadDir(study)
	if err != nil {
		return nil, fmt.Errorf("cannot read the folder %s: %w", study, reason(err))
	}
	last := 0
	for _, e := range entries {
		if n, err := strconv.Atoi(e.Name()); err == nil && n > last && len(e.Name()) <= 9 {
			last = n
		}
	}
	for n := last + 1; ; n++ {
		f := &folder{number: n, hidden: filepath.Join(study, fmt.Sprintf(".%04d.part", n)),
			public: filepath.Join(study, fmt.Sprintf("%04d", n))}
		err := os.Mkdir(f.hidden, 0o777)
		if errors.Is(err, fs.ErrExist) {
			continue // another run has it, or one was killed
		}
		if err != nil {
			return nil, fmt.Errorf("cannot make the folder %s: %w", f.hidden, reason(err))
		}
		if _, err := os.Lstat(f.public); err == nil {
			f.drop() // finished between our look and our reservation
			continue
		}
		return f, nil
	}
}

// add writes one file.
func (f *folder) add(name string, content []byte) error {
	w, err := os.Create(filepath.Join(f.hidden, name))
	if err != nil {
		return fmt.Errorf("cannot write %s: %w", name, reason(err))
	}
	_, err = w.Write(content)
	if err == nil {
		err = w.Sync()
	}
	if closing := w.Close(); err == nil {
		err = closing
	}
	if err != nil {
		return fmt.Errorf("cannot write %s: %w", name, reason(err))
	}
	return nil
}

// publish gives the complete folder its name and returns it.
func (f *folder) publish() (string, error) {
	if err := os.Rename(f.hidden, f.public); err != nil {
		return "", fmt.Errorf("cannot name the folder %s: %w", f.public, reason(err))
	}
	return f.public, nil
}

// drop removes the folder if it was not published.
func (f *folder) drop() { os.RemoveAll(f.hidden) }
