package record

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
)

// Digest returns the SHA-256 of the compact JSON of the results, hexadecimal: the digest that a record carries as
// results_sha256. Keys stand in the order of the types, numbers are the shortest that read back exactly.
func (r *Results) Digest() (string, error) { return digestOf(r) }

func digestOf(v any) (string, error) {
	b, err := compact(v)
	if err != nil {
		return "", err
	}
	sum := sha256.Sum256(b)
	return hex.EncodeToString(sum[:]), nil
}

func compact(v any) ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		return nil, err // a NaN or an infinity: our own mistake, found here rather than by a reader
	}
	return bytes.TrimSuffix(b.Bytes(), []byte("\n")), nil
}

// New makes a record of results and the run that made them.
func New(results *Results, run Run) (*Record, error) {
	digest, err := results.Digest()
	if err != nil {
		return nil, err
	}
	r := &Record{Version: Version, Results: *results, ResultsSHA256: digest, Run: run}
	r.RunSHA256, err = digestOf(&r.Run)
	return r, err
}

// Write writes the record as indented JSON with one newline at the end. The same record gives the same bytes.
func (r *Record) Write(w io.Writer) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(r)
}

// Errors of Read that a caller may tell apart.
var (
	ErrNotRecord = errors.New("not a run record of this program")
	ErrVersion   = errors.New("a run record of another layout")
	ErrAltered   = errors.New("the content does not agree with the digests that the record carries")
)

// limit is the largest record that Read takes.
const limit = 1 << 30

// Read reads a record and checks that its results agree with its digest. With ErrAltered the record is returned too.
// Keys that this layout does not have are refused, since they would be lost from the digest.
func Read(r io.Reader) (*Record, error) {
	b, err := io.ReadAll(io.LimitReader(r, limit+1))
	if err != nil {
		return nil, err
	}
	if len(b) > limit {
		return nil, fmt.Errorf("%w: it is larger than 1 GiB", ErrNotRecord)
	}
	var head struct {
		Version *int `json:"lotproof_record"`
	}
	if err := json.Unmarshal(b, &head); err != nil || head.Version == nil {
		return nil, ErrNotRecord
	}
	if *head.Version != Version {
		return nil, fmt.Errorf("%w: it has number %d, this program reads %d", ErrVersion, *head.Version, Version)
	}
	d := json.NewDecoder(bytes.NewReader(b))
	d.DisallowUnknownFields()
	var out Record
	if err := d.Decode(&out); err != nil {
		return nil, fmt.Errorf("%w: %v", ErrNotRecord, plainly(err))
	}
	if d.More() {
		return nil, fmt.Errorf("%w: text follows its end", ErrNotRecord)
	}
	digest, err := out.Results.Digest()
	if err != nil {
		return nil, err
	}
	ofRun, err := digestOf(&out.Run)
	if err != nil {
		return nil, err
	}
	if digest != out.ResultsSHA256 || ofRun != out.RunSHA256 {
		return &out, ErrAltered
	}
	// The digest is over the content. The file itself must also be just what Write makes, so that no byte is free.
	var again bytes.Buffer
	if err := out.Write(&again); err != nil {
		return nil, err
	}
	if !bytes.Equal(again.Bytes(), b) {
		return &out, ErrAltered
	}
	return &out, nil
}

// plainly says where JSON is wrong without naming types of the program.
func plainly(err error) error {
	var syntax *json.SyntaxError
	var kind *json.UnmarshalTypeError
	switch {
	case errors.As(err, &syntax):
		return fmt.Errorf("byte %d is not what JSON has there", syntax.Offset)
	case errors.As(err, &kind):
		return fmt.Errorf("%s holds a %s at byte %d", kind.Field, kind.Value, kind.Offset)
	case errors.Is(err, io.ErrUnexpectedEOF):
		return errors.New("the file ends too early")
	}
	return err
}
