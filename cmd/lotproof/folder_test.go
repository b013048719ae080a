package main

import (
	"os"
	"path/filepath"
	"sync"
	"testing"
)

// Many runs at once get different numbers, none is lost and none overwritten.
func TestFoldersAtOnce(t *testing.T) {
	study := filepath.Join(t.TempDir(), "runs", "S")
	const runs = 24
	var group sync.WaitGroup
	numbers := make([]int, runs)
	for i := range runs {
		group.Go(func() {
			f, err := reserve(study)
			if err != nil {
				t.Error(err)
				return
			}
			defer f.drop()
			if err := f.add("content", []byte{byte(i)}); err != nil {
				t.Error(err)
			}
			if _, err := f.publish(); err != nil {
				t.Error(err)
			}
			numbers[i] = f.number
		})
	}
	group.Wait()
	seen := map[int]bool{}
	for i, n := range numbers {
		if n < 1 || seen[n] {
			t.Errorf("run %d has the number %d, which is taken or not a number", i, n)
		}
		seen[n] = true
	}
	entries, err := os.ReadDir(study)
	if err != nil {
		t.Fatal(err)
	}
	if len(entries) != runs {
		t.Errorf("%d folders, want %d", len(entries), runs)
	}
}

// A folder that a killed run left, and a file with the name of a run, are passed over; what is not published goes away.
func TestFolderInTheWay(t *testing.T) {
	study := t.TempDir()
	if err := os.Mkdir(filepath.Join(study, ".0001.part"), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(study, "0002"), nil, 0o666); err != nil {
		t.Fatal(err)
	}
	f, err := reserve(study)
	if err != nil {
		t.Fatal(err)
	}
	if f.number != 3 {
		t.Errorf("number %d, want 3", f.number)
	}
	f.drop()
	if _, err := os.Stat(f.hidden); !os.IsNotExist(err) {
		t.Errorf("the hidden folder is still there: %v", err)
	}
}
