package main

import (
	"bytes"
	"os"
	"testing"
)

// The data in the folder are what the program writes.
func TestFilesAreWhatIsMade(t *testing.T) {
	strips, pouches := tables()
	for name, want := range map[string][]byte{"../strips.csv": strips, "../pouches.csv": pouches} {
		got, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got, want) {
			t.Errorf("%s is not what the program writes; run go run ./examples/harbour/make examples/harbour", name)
		}
	}
}
