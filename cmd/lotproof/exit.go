package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"lotproof/spec"
)

// The exit statuses.
const (
	done      = 0 // every criterion met, or none set
	unmet     = 1 // done, but a criterion is not met or not shown
	wrong     = 2 // the plan, the data or the command line is wrong
	failed    = 3 // the program or the machine failed
	different = 4 // a replay differs
)

// A usage error is a command line that cannot be carried out.
type usage struct{ text string }

func (u usage) Error() string { return u.text }

// A difference is the end of a replay that does not agree; what differs has been printed.
type difference struct{ text string }

func (d difference) Error() string { return d.text }

// status prints the error, if any, and returns the exit status.
func status(err error, unmetCriterion bool, stderr io.Writer) int {
	if err == nil {
		if unmetCriterion {
			return unmet
		}
		return done
	}
	var mistakes spec.Errors
	var u usage
	var d difference
	switch {
	case errors.As(err, &mistakes):
		fmt.Fprintln(stderr, mistakes)
		return wrong
	case errors.As(err, &d):
		fmt.Fprintln(stderr, "lotproof: "+d.text)
		return different
	case errors.As(err, &u):
		fmt.Fprintln(stderr, "lotproof: "+u.text)
		return wrong
	case strings.HasPrefix(err.Error(), "unknown command"): // from the command-line library, with its suggestions
		text, more, _ := strings.Cut(err.Error(), "\n")
		text = strings.TrimSuffix(text, ` for "lotproof"`)
		if _, near, found := strings.Cut(more, "Did you mean this?"); found {
			text += "; did you mean " + strings.Join(strings.Fields(near), " or ") + "?"
		}
		fmt.Fprintln(stderr, "lotproof: "+text+"; see lotproof --help")
		return wrong
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(stderr, "lotproof: interrupted; nothing was written")
		return failed
	}
	fmt.Fprintln(stderr, "lotproof: "+err.Error())
	return failed
}

// one makes a command take exactly one argument.
func one(what string) cobra.PositionalArgs {
	return func(c *cobra.Command, args []string) error {
		if len(args) == 1 {
			return nil
		}
		return usage{fmt.Sprintf("%s takes one %s, not %d; write lotproof %s", c.Name(), what, len(args), c.Use)}
	}
}
