package main

import (
	"flag"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

var update = flag.Bool("update", false, "rewrite what the scripts expect from the current output")

func TestMain(m *testing.M) { testscript.Main(m, map[string]func(){"lotproof": main}) }

// The command as a user meets it: each script runs the real program and compares whole outputs and exit statuses.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{Dir: "../../testdata/cmd", UpdateScripts: *update, RequireUniqueNames: true})
}
