package source

import (
	"fmt"
	"strconv"

	"lotproof/spec"
)

// mostListed is how many mistakes of one data file are listed; the rest are counted. A file in another layout has one
// mistake a cell, and nobody reads a million lines.
const mostListed = 50

// mistakes collects what is wrong in one data file.
type mistakes struct {
	file string // as the plan names it
	list spec.Errors
	more int // found and not listed
}

// full says whether a further mistake will only be counted, so that the caller need not find its place.
func (m *mistakes) full() bool { return len(m.list) >= mostListed }

// add takes a mistake. Where e.File is empty, the place is in the file as a whole.
func (m *mistakes) add(e spec.Error) {
	if m.full() {
		m.more++
		return
	}
	if e.File == "" {
		e.File = m.file
	}
	m.list = append(m.list, e)
}

// all returns the list, with a last entry for those that are only counted.
func (m *mistakes) all() spec.Errors {
	if m.more == 0 {
		return m.list
	}
	problem := fmt.Sprintf("%d more mistakes are not listed", m.more)
	if m.more == 1 {
		problem = "1 more mistake is not listed"
	}
	return append(m.list, spec.Error{File: m.file, Problem: problem, Fix: "correct those above and check again"})
}

// longestQuote is how many characters of a cell a message repeats.
const longestQuote = 40

// quote returns text in quotation marks for a message, cut if long; what cannot be printed is written as an escape.
func quote(text string) string {
	characters := []rune(text)
	if len(characters) > longestQuote {
		return strconv.Quote(string(characters[:longestQuote])) + "…"
	}
	return strconv.Quote(text)
}
