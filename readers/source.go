package readers

import (
	"bytes"
	"io"
	"os"
)

// source is a file that can be read more than once: on disk from its start, a
// stream from the copy that was made of it.
type source struct {
	name   string
	file   *os.File // nil for a stream
	size   int64
	blocks [][]byte // of a stream
}

// open gives the bytes from the start.
func (s *source) open() (io.Reader, error) {
	if s.file != nil {
		if _, err := s.file.Seek(0, io.SeekStart); err != nil {
			return nil, &Error{Pos: Pos{File: s.name}, Msg: "can't be read: " + err.Error(), Err: err}
		}
		return s.file, nil
	}
	parts := make([]io.Reader, len(s.blocks))
	for i, b := range s.blocks {
		parts[i] = bytes.NewReader(b)
	}
	return io.MultiReader(parts...), nil
}

// readerAt gives the bytes by position, for the parts of a workbook.
func (s *source) readerAt() io.ReaderAt {
	if s.file != nil {
		return s.file
	}
	whole := make([]byte, 0, s.size)
	for _, b := range s.blocks {
		whole = append(whole, b...)
	}
	s.blocks = [][]byte{whole}
	return bytes.NewReader(whole)
}

// head gives up to n bytes from the start.
func (s *source) head(n int) ([]byte, error) {
	r, err := s.open()
	if err != nil {
		return nil, err
	}
	b := make([]byte, n)
	k, err := io.ReadFull(r, b)
	if err == io.EOF || err == io.ErrUnexpectedEOF {
		err = nil
	}
	if err != nil {
		return nil, &Error{Pos: Pos{File: s.name}, Msg: "can't be read: " + plainCause(err), Err: err}
	}
	return b[:k], nil
}

// hold copies a stream into memory, up to the limit.
func hold(name string, r io.Reader, limits Limits) (source, error) {
	const block = 1 << 20
	s := source{name: name}
	n := 1 << 12
	for {
		b := make([]byte, n)
		k, err := io.ReadFull(r, b)
		if k > 0 {
			s.blocks = append(s.blocks, b[:k])
			s.size += int64(k)
		}
		if s.size > limits.File {
			return s, refuse(Pos{File: name}, "has more than %s, and more isn't read: raise it with --limit file=%s", size(limits.File), limitValue(4*limits.File))
		}
		if err == io.EOF || err == io.ErrUnexpectedEOF {
			return s, nil
		}
		if err != nil {
			return s, &Error{Pos: Pos{File: name}, Msg: "can't be read to its end: " + plainCause(err), Err: err}
		}
		n = min(4*n, block)
	}
}
