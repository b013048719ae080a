package source

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"fmt"
	"io"
	"strings"
)

// Bounds on what a workbook may unpack to. A small file can claim to hold gigabytes.
const (
	mostParts     = 4096
	mostPartBytes = 256 << 20
	mostUnpacked  = 512 << 20
	mostCells     = 5_000_000 // of one sheet, rows times headings
)

const (
	damaged    = "the workbook is damaged"
	damagedFix = "open it in a spreadsheet program and save it again as .xlsx"
)

// checkArchive looks at every part of a workbook before the library does: it believes the sizes that the archive claims
// and does not check its sums.
func checkArchive(content []byte) (problem, fix string) {
	if bytes.HasPrefix(content, []byte("\xd0\xcf\x11\xe0")) {
		return "the workbook is protected by a password or has the old format " +
			".xls", "save it as .xlsx without a password"
	}
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	if err != nil {
		return "the file is not a workbook", "save it in a spreadsheet program as .xlsx"
	}
	tooLarge := fmt.Sprintf("the workbook unpacks to more than %d MiB", mostUnpacked>>20)
	if len(archive.File) > mostParts {
		return fmt.Sprintf("the workbook has more than %d parts", mostParts), "save the sheet alone"
	}
	seen := map[string]bool{}
	var sum uint64
	for _, part := range archive.File {
		name := strings.ToLower(strings.ReplaceAll(part.Name, `\`, "/"))
		if seen[name] { // two programs might each read another one
			return "the workbook holds the part " + quote(part.Name) + " twice", damagedFix
		}
		seen[name] = true
		sum += part.UncompressedSize64
		if part.UncompressedSize64 > mostPartBytes || sum > mostUnpacked {
			return tooLarge, "save the sheet alone"
		}
		in, err := part.Open()
		if err != nil {
			return damaged, damagedFix
		}
		n, err := io.Copy(io.Discard, io.LimitReader(in, mostPartBytes+1)) // to the end: that compares the sums
		in.Close()
		if err != nil || uint64(n) != part.UncompressedSize64 {
			return damaged, damagedFix
		}
	}
	return "", ""
}

// A relation says which part of the archive plays which role.
type relation struct {
	ID     string `xml:"Id,attr"`
	Type   string `xml:"Type,attr"`
	Target string `xml:"Target,attr"`
}

func relations(part []byte) []relation {
	var all struct {
		Relationship []relation
	}
	if xml.Unmarshal(part, &all) != nil {
		return nil // then no sheet is found, which is reported
	}
	return all.Relationship
}
