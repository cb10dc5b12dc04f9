package main

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"os"

	"github.com/spf13/cobra"

	"footing/audit"
	"footing/audit/report"
	"footing/readers"
)

// source is what is audited, which some reports read once more.
type source struct {
	file string
	keep bool // standard input is kept, since it can't be read again

	stdin bytes.Buffer
	read  *readers.Table
}

// table reads the file, or standard input for -.
func (s *source) table(cmd *cobra.Command, o readers.Options) (t *readers.Table, err error) {
	switch {
	case s.file != "-":
		t, err = readers.Open(s.file, o)
	case s.keep:
		t, err = readers.Read("-", io.TeeReader(cmd.InOrStdin(), &s.stdin), o)
	default:
		t, err = readers.Read("-", cmd.InOrStdin(), o)
	}
	s.read = t
	return t, err
}

// bytes gives the input once more, the same bytes that were audited.
func (s *source) bytes() ([]byte, error) {
	if s.file == "-" {
		return s.stdin.Bytes(), nil
	}
	raw, err := os.ReadFile(s.file)
	if err != nil {
		return nil, fmt.Errorf("%s: can't be read once more: %w", s.file, cause(err))
	}
	if sum := sha256.Sum256(raw); hex.EncodeToString(sum[:]) != s.read.SHA256 {
		return nil, fmt.Errorf("%s: changed while it was audited; run again", s.file)
	}
	return raw, nil
}

// spans finds where fields stand in a text file.
func (s *source) spans(places []readers.Pos) (map[readers.Pos]readers.Span, error) {
	if s.read.Format != readers.TextFile || len(places) == 0 {
		return nil, nil
	}
	raw, err := s.bytes()
	if err != nil {
		return nil, err
	}
	return readers.Spans(bytes.NewReader(raw), s.read, places)
}

// mark writes the marked workbook.
func (s *source) mark(w io.Writer, r *audit.Result) error {
	raw, err := s.bytes()
	if err != nil {
		return err
	}
	return report.Marked(w, r, s.read, raw)
}
