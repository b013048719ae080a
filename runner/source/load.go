package source

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"strings"

	"lotproof/spec"
)

// mostBytes bounds the size of a data file: it is held in memory once as it is and once as a table.
const mostBytes = 512 << 20

// Load reads every source of the plan, whose files are relative to dir, and makes the row ledger of every statistic.
//
// A file is read once; its size and digest are those of the bytes that were parsed. Mistakes in the files, and in what
// the plan says of them, are collected over all sources and statistics and returned together as spec.Errors; there is
// no other error, and no data beside one.
func Load(plan *spec.Plan, dir string) (*Data, error) {
	var all spec.Errors
	data := &Data{}
	tables := map[string]*Table{} // those without a mistake
	for i := range plan.Sources {
		t, bad := load(plan, &plan.Sources[i], dir)
		all = append(all, bad...)
		if len(bad) == 0 {
			tables[t.Source.Name] = t
		}
		data.Tables = append(data.Tables, t)
	}
	said := map[spec.Error]bool{}
	for i := range plan.Statistics {
		t := tables[plan.Statistics[i].Source]
		if t == nil {
			continue // the source is reported already
		}
		s, bad := Select(plan, i, t)
		for _, e := range bad {
			if !said[e] { // a row in doubt is the same mistake for every statistic
				all = append(all, e)
			}
			said[e] = true
		}
		data.Selections = append(data.Selections, s)
	}
	if len(all) > 0 {
		return nil, all
	}
	return data, nil
}

// load reads one source.
func load(plan *spec.Plan, s *spec.Source, dir string) (*Table, spec.Errors) {
	content, err := readFile(filepath.Join(dir, filepath.FromSlash(s.File)), mostBytes)
	if err != nil {
		problem, fix := unreadable(s.File, err)
		return nil, spec.Errors{plan.Mistake("sources."+s.Name+".file", problem, fix)}
	}
	digest := sha256.Sum256(content)
	t := &Table{Source: *s, Bytes: int64(len(content)), SHA256: hex.EncodeToString(digest[:])}
	b := &builder{plan: plan, table: t, bad: &mistakes{file: s.File}}
	if s.SHA256 != "" && !strings.EqualFold(s.SHA256, t.SHA256) {
		b.planBad = append(b.planBad, plan.Mistake("sources."+s.Name+".sha256",
			fmt.Sprintf("the data in %s differ from the digest in the plan", s.File),
			"find out what changed in the file; if the change is right, write sha256: "+t.SHA256))
	}
	switch strings.ToLower(path.Ext(s.File)) {
	case ".csv":
		separated(content, ',', b)
	case ".tsv":
		separated(content, '\t', b)
	case ".xlsx":
		workbook(content, b)
	default:
		return nil, spec.Errors{plan.Mistake("sources."+s.Name+".file", "the kind of the file "+
			""+quote(s.File)+" is not known",
			"name a file that ends with .csv, .tsv or .xlsx")}
	}
	bad := append(b.planBad, b.bad.all()...)
	if len(bad) > 0 {
		return nil, bad
	}
	bad = t.complete(plan, b.bad)
	return t, append(bad, b.bad.all()...)
}

var (
	errTooLarge = errors.New("too large")
	errNoFile   = errors.New("not a file")
)

// readFile returns the content of a plain file of at most most bytes.
func readFile(name string, most int64) ([]byte, error) {
	info, err := os.Stat(name) // before opening: to open a named pipe may wait for ever
	if err != nil {
		return nil, err
	}
	if !info.Mode().IsRegular() {
		return nil, errNoFile
	}
	if info.Size() > most {
		return nil, errTooLarge
	}
	f, err := os.Open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close() // opened for reading: closing cannot lose anything
	var content bytes.Buffer
	content.Grow(int(info.Size()) + bytes.MinRead)
	if _, err := content.ReadFrom(io.LimitReader(f, most+1)); err != nil {
		return nil, err
	}
	if int64(content.Len()) > most { // it grew meanwhile
		return nil, errTooLarge
	}
	return content.Bytes(), nil
}

// unreadable words the error of readFile, alike on every system.
func unreadable(file string, err error) (problem, fix string) {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Sprintf("there is no file %s", quote(file)), "write the path as seen from the plan, with " +
			"forward slashes"
	case errors.Is(err, fs.ErrPermission):
		return fmt.Sprintf("the file %s may not be read", quote(file)), "ask for permission to read it"
	case errors.Is(err, errNoFile):
		return fmt.Sprintf("%s is not a file", quote(file)), "name a data file"
	case errors.Is(err, errTooLarge):
		return fmt.Sprintf("the file %s is larger than %d MiB", quote(file), mostBytes>>20), "divide the study"
	}
	var at *fs.PathError
	if errors.As(err, &at) {
		err = at.Err
	}
	return fmt.Sprintf("the file %s cannot be read: %v", quote(file), err), "see that the disk is in order"
}
