package source

import (
	"crypto/sha256"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"lotproof/spec"
)

const goodFile = "pouch,arm,strength,note\nP1,fresh,1.30,\nP2,aged,1.20,void\n"

func TestLoadDigest(t *testing.T) {
	plan := pouches("peel.csv")
	want := fmt.Sprintf("%x", sha256.Sum256([]byte(goodFile)))
	for _, declared := range []string{"", want, strings.ToUpper(want)} {
		plan.Sources[0].SHA256 = declared
		data, err := loadText(t, plan, goodFile)
		must(t, err)
		if got := data.Tables[0]; got.SHA256 != want || got.Bytes != int64(len(goodFile)) {
			t.Errorf("digest %s, %d bytes; want %s, %d", got.SHA256, got.Bytes, want, len(goodFile))
		}
	}
	plan.Sources[0].SHA256 = strings.Repeat("0", 64)
	_, err := loadText(t, plan, goodFile+"P3,aged,x1,\n")
	compare(t, err, []string{
		"plan.yaml:1:1: the data in peel.csv differ from the digest in the plan; find out what changed in the " +
			"file; if the " +
			"change is right, write sha256: " + fmt.Sprintf("%x", sha256.Sum256([]byte(goodFile+"P3,aged,x1,\n"))),
		"peel.csv:4:9: column strength: \"x1\" is not a number; write digits with a decimal point, or list the " +
			"text under " +
			"missing of the source if it means no value",
	})
}

// Mistakes of all sources come together, in the order of the plan.
func TestLoadUnreadable(t *testing.T) {
	plan := pouches("peel.csv")
	dir := t.TempDir()
	must(t, os.Mkdir(filepath.Join(dir, "folder.csv"), 0o777))
	must(t, os.WriteFile(filepath.Join(dir, "peel.csv"), nil, 0o666))
	for _, file := range []string{"sub/none.csv", "folder.csv", "peel.ods"} {
		plan.Sources = append(plan.Sources, spec.Source{Name: file, File: file})
	}
	must(t, os.WriteFile(filepath.Join(dir, "peel.ods"), nil, 0o666))
	_, err := Load(plan, dir)
	compare(t, err, []string{
		"peel.csv: the file is empty; write headings in the first line and one row a line",
		"plan.yaml:1:1: there is no file \"sub/none.csv\"; write the path as seen from the plan, with forward slashes",
		"plan.yaml:1:1: \"folder.csv\" is not a file; name a data file",
		"plan.yaml:1:1: the kind of the file \"peel.ods\" is not known; name a file that ends with .csv, .tsv or .xlsx",
	})
}

func TestReadFileBound(t *testing.T) {
	name := filepath.Join(t.TempDir(), "data.csv")
	must(t, os.WriteFile(name, []byte("12345"), 0o666))
	for most, want := range map[int64]error{4: errTooLarge, 5: nil, 6: nil} {
		content, err := readFile(name, most)
		if err != want || err == nil && string(content) != "12345" {
			t.Errorf("at most %d bytes: %q, error %v; want error %v", most, content, err, want)
		}
	}
	problem, _ := unreadable("data.csv", errTooLarge)
	if want := `the file "data.csv" is larger than 512 MiB`; problem != want {
		t.Errorf("%s, want %s", problem, want)
	}
}
