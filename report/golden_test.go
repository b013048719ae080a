package report

import (
	"bytes"
	"flag"
	"os"
	"path/filepath"
	"testing"
)

var update = flag.Bool("update", false, "rewrite the golden files from the current output")

func golden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("../testdata/report", name)
	if *update {
		must(t, os.MkdirAll(filepath.Dir(path), 0o777))
		must(t, os.WriteFile(path, got, 0o666))
	}
	want, err := os.ReadFile(path)
	must(t, err) // a missing golden file is a failure, not an empty one
	if !bytes.Equal(got, want) {
		t.Errorf("%s differs\n--- want\n%s--- got\n%s", path, want, got)
	}
}

func must(t testing.TB, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}
