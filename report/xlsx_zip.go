package report

import (
	"archive/zip"
	"bytes"
	"errors"
	"io"
	"io/fs"
	"maps"
	"regexp"
	"slices"
	"strings"
	"time"
)

// A sortedZip collects the parts of a workbook and writes them in one order with one time. The workbook library hands
// them over in the order of a map, which changes from run to run.
type sortedZip struct {
	w     io.Writer
	parts map[string]*bytes.Buffer
	time  time.Time
}

// Create returns the writer of one part.
func (z *sortedZip) Create(name string) (io.Writer, error) {
	part := new(bytes.Buffer)
	z.parts[name] = part
	return part, nil
}

// AddFS is required by the library and never called.
func (z *sortedZip) AddFS(fs.FS) error { return errors.New("a workbook holds no folders of files") }

// Close writes the archive.
func (z *sortedZip) Close() error {
	names := slices.Sorted(maps.Keys(z.parts))
	slices.SortStableFunc(names, func(a, b string) int { return partRank(a) - partRank(b) })
	archive := zip.NewWriter(z.w)
	for _, name := range names {
		body := z.parts[name].Bytes()
		if name == contentTypes {
			body = sortTypes(body)
		}
		part, err := archive.CreateHeader(&zip.FileHeader{Name: name, Method: zip.Deflate, Modified: z.time})
		if err != nil {
			return err
		}
		if _, err := part.Write(body); err != nil {
			return err
		}
	}
	return archive.Close()
}

const contentTypes = "[Content_Types].xml"

// partRank puts the parts first that readers look for first.
func partRank(name string) int {
	switch name {
	case contentTypes:
		return 0
	case "_rels/.rels":
		return 1
	}
	return 2
}

var typeElement = regexp.MustCompile(`<(Default|Override) [^>]*?(/>|></(Default|Override)>)`)

// sortTypes sorts the list of content types, whose order carries no meaning.
func sortTypes(body []byte) []byte {
	at := typeElement.FindAllIndex(body, -1)
	if len(at) == 0 {
		return body
	}
	var elements []string
	for _, p := range at {
		elements = append(elements, string(body[p[0]:p[1]]))
	}
	slices.Sort(elements)
	head, tail := body[:at[0][0]], body[at[len(at)-1][1]:]
	return []byte(string(head) + strings.Join(elements, "") + string(tail))
}
