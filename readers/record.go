package readers

import (
	"bytes"
	"errors"
	"io"
	"unicode/utf8"
)

// field is one field of a record: the bytes between the delimiters, or between
// the quotes with doubled quotes still doubled.
type field struct {
	text   []byte
	quoted bool
	double bool // holds doubled quotes
}

// scanner cuts a stream of UTF-8 text into records by the rules of RFC 4180, and
// forgives what people and programs do beside it: line ends of any kind, spaces
// around quotes, quotes inside a field. It counts lines, which a field with line
// breaks in it makes different from records.
type scanner struct {
	r       io.Reader
	buf     []byte
	at, end int
	from    int // where the current record starts in buf
	eof     bool
	limit   int64 // longest record in bytes
	delim   byte  // 0 when each line is one field
	bars    bool  // a bar at both ends of each line adds no fields

	next  int // line on which the next record starts
	line  int // line on which the current record starts
	lines int // lines that the current record takes
	field []field

	loose int // line of the first quote that was not doubled inside quotes; 0 for none
	long  int // line of the first quoted field of more than 64 lines; 0 for none
	opens int // line of the quote that a syntax error speaks of
}

const (
	readAhead      = 1 << 18
	longQuoteLines = 64
)

// newScanner reads from r; length is about how much there is.
func newScanner(r io.Reader, delim byte, limit, length int64) *scanner {
	return &scanner{r: r, delim: delim, limit: limit, next: 1, buf: make([]byte, bufferFor(length))}
}

// bufferFor gives the size of a buffer for a file: small files are common, and
// memory that is touched costs more than reading them.
func bufferFor(length int64) int { return int(min(max(length+16, 512), readAhead)) }

// errUnclosed tells that a quote opens at scanner.opens and never closes.
var errUnclosed = errors.New("a quote opens and never closes")

// errLongLine tells that a record is longer than the limit.
var errLongLine = errors.New("record beyond the limit")

// scan moves to the next record, a blank line included; io.EOF ends. The fields
// are good until the next call.
func (s *scanner) scan() error {
	for {
		n, err := s.cut(s.buf[s.at:s.end], s.eof)
		if err != nil {
			return err
		}
		if n > 0 {
			s.line = s.next
			s.next += s.lines
			s.from = s.at
			s.at += n
			return nil
		}
		if s.eof {
			return io.EOF
		}
		if err := s.fill(); err != nil {
			return err
		}
	}
}

// fill reads on; a record that fills the buffer makes it longer.
func (s *scanner) fill() error {
	if s.at > 0 {
		copy(s.buf, s.buf[s.at:s.end])
		s.end -= s.at
		s.at = 0
	}
	if s.end == len(s.buf) {
		if int64(s.end) > s.limit {
			return errLongLine
		}
		longer := make([]byte, 2*len(s.buf))
		copy(longer, s.buf)
		s.buf = longer
	}
	for range 100 {
		n, err := s.r.Read(s.buf[s.end:])
		s.end += n
		if err == io.EOF {
			s.eof = true
			return nil
		}
		if err != nil {
			return err
		}
		if n > 0 {
			return nil
		}
	}
	return io.ErrNoProgress
}

// cut takes one record off b and gives its length with the line end; 0 when b
// does not hold a whole one yet. last tells that nothing follows b.
func (s *scanner) cut(b []byte, last bool) (n int, err error) {
	s.field = s.field[:0]
	s.lines = 1
	if len(b) == 0 {
		return 0, nil
	}
	i := 0
	delim := s.delim
	if b[0] == '#' {
		// A remark may hold quotes that mean nothing: it never reaches beyond its line.
		return s.cutRemark(b, last)
	}
	for {
		start := i
		if i < len(b) && (b[i] == '"' || b[i] == ' ' || b[i] == '\t' || b[i] >= utf8.RuneSelf) {
			next, done, wait, err := s.cutQuoted(b, i, last)
			if err != nil {
				return 0, err
			}
			if wait {
				return 0, s.tooLong(b)
			}
			if done {
				i = next
				goto end
			}
		}
		for i < len(b) && b[i] != delim && b[i] != '\n' && b[i] != '\r' {
			i++
		}
		s.field = append(s.field, field{text: b[start:i]})
	end:
		if i == len(b) {
			if !last {
				return 0, s.tooLong(b)
			}
			break
		}
		c := b[i]
		i++
		if c == '\n' {
			break
		}
		if c == '\r' && !(c == delim) {
			if i == len(b) && !last {
				return 0, s.tooLong(b) // a line feed may follow
			}
			if i < len(b) && b[i] == '\n' {
				i++
			}
			break
		}
	}
	if int64(i) > s.limit {
		return 0, errLongLine
	}
	if s.bars {
		s.stripBars()
	}
	return i, nil
}

func (s *scanner) tooLong(b []byte) error {
	if int64(len(b)) > s.limit {
		return errLongLine
	}
	return nil
}

// lineEnd gives where the line in b ends and how long its end is; ok is false
// when b must be longer to tell.
func lineEnd(b []byte, last bool) (at, length int, ok bool) {
	at = bytes.IndexAny(b, "\r\n")
	switch {
	case at < 0:
		return len(b), 0, last
	case b[at] == '\n':
		return at, 1, true
	case at+1 < len(b) && b[at+1] == '\n':
		return at, 2, true
	case at+1 == len(b) && !last:
		return at, 1, false
	}
	return at, 1, true
}

// cutRemark cuts a line that starts with #. It is split into fields like any
// other, but quotes in it close on the same line or are letters.
func (s *scanner) cutRemark(b []byte, last bool) (n int, err error) {
	at, length, ok := lineEnd(b, last)
	if !ok {
		return 0, s.tooLong(b)
	}
	if int64(at) > s.limit {
		return 0, errLongLine
	}
	line := b[:at]
	for i := 0; ; {
		start := i
		if i < len(line) && line[i] == '"' {
			if next, done, _, err := s.cutQuoted(line, i, true); err == nil && done {
				i = next
				if i == len(line) {
					break
				}
				i++
				continue
			}
		}
		for i < len(line) && line[i] != s.delim {
			i++
		}
		s.field = append(s.field, field{text: line[start:i]})
		if i == len(line) {
			break
		}
		i++
	}
	s.lines = 1
	if s.bars {
		s.stripBars()
	}
	return at + length, nil
}

// cutQuoted cuts a field that starts with a quote, after padding or at once. done
// is false when it is no quoted field; wait is true when b is too short to tell.
func (s *scanner) cutQuoted(b []byte, from int, last bool) (next int, done, wait bool, err error) {
	i := s.skipPadding(b, from)
	if i == len(b) {
		return 0, false, !last && i > from, nil
	}
	if b[i] != '"' {
		return 0, false, false, nil
	}
	open := i
	double := false
	breaks := 0
	closing := -1 // where the line's last quote before a delimiter stands, once it is known
	for i++; ; {
		q := bytes.IndexByte(b[i:], '"')
		if q < 0 {
			if !last {
				return 0, false, true, nil
			}
			s.opens = s.next + s.lines - 1
			return 0, false, false, errUnclosed
		}
		breaks += countBreaks(b[i : i+q])
		i += q + 1
		if i < len(b) && b[i] == '"' {
			double = true
			i++
			continue
		}
		if i == len(b) && !last {
			return 0, false, true, nil
		}
		after := s.skipPadding(b, i)
		if after == len(b) && !last {
			return 0, false, true, nil
		}
		if after == len(b) || b[after] == s.delim || b[after] == '\n' || b[after] == '\r' {
			s.field = append(s.field, field{text: b[open+1 : i-1], quoted: true, double: double})
			if breaks > longQuoteLines && s.long == 0 {
				s.long = s.next + s.lines - 1
			}
			s.lines += breaks
			return after, true, false, nil
		}
		// The quote is followed by text: it was not doubled. Within one line that is
		// forgiven; over several it means that an earlier quote never closed.
		if breaks > 0 {
			s.opens = s.next + s.lines - 1
			return 0, false, false, errUnclosed
		}
		if closing < 0 {
			at, _, ok := lineEnd(b[i:], last)
			if !ok {
				return 0, false, true, nil
			}
			if s.loose == 0 {
				s.loose = s.next + s.lines - 1
			}
			closing = i + s.lastClosing(b[i:i+at])
		}
		if i > closing {
			return 0, false, false, nil
		}
	}
}

// lastClosing gives the place of the last quote before a delimiter or the end in
// the rest of a line; -1 when there is none.
func (s *scanner) lastClosing(rest []byte) int {
	for end := len(rest); ; {
		q := bytes.LastIndexByte(rest[:end], '"')
		if q < 0 {
			return -1
		}
		after := s.skipPadding(rest, q+1)
		if after == len(rest) || rest[after] == s.delim {
			return q
		}
		end = q
	}
}

// skipPadding passes over padding within a line.
func (s *scanner) skipPadding(b []byte, i int) int {
	for i < len(b) {
		c := b[i]
		switch {
		case c == s.delim || c == '\n' || c == '\r':
			return i
		case c == ' ' || c == '\t':
			i++
		case c >= utf8.RuneSelf:
			r, n := utf8.DecodeRune(b[i:])
			if !isPadding(r) {
				return i
			}
			i += n
		default:
			return i
		}
	}
	return i
}

// countBreaks counts line ends: LF, CRLF and lone CR.
func countBreaks(b []byte) int {
	n := bytes.Count(b, []byte{'\n'})
	for i := range b {
		if b[i] == '\r' && (i+1 == len(b) || b[i+1] != '\n') {
			n++
		}
	}
	return n
}

// stripBars takes off the empty fields before the first and after the last bar.
func (s *scanner) stripBars() {
	isBlank := func(f field) bool {
		core, _, _ := trimmed(f.text)
		return !f.quoted && len(core) == 0
	}
	if n := len(s.field); n > 1 && isBlank(s.field[n-1]) {
		s.field = s.field[:n-1]
	}
	if len(s.field) > 1 && isBlank(s.field[0]) {
		s.field = append(s.field[:0], s.field[1:]...)
	}
}

// blank tells whether the record is a line with nothing but padding.
func (s *scanner) blank() bool {
	if len(s.field) != 1 || s.field[0].quoted {
		return false
	}
	core, _, _ := trimmed(s.field[0].text)
	return len(core) == 0
}

// core gives the text of a field without padding and with its quotes resolved;
// it may change the field's bytes in place, which are read only once.
func (f *field) core() (text []byte, padded, invisible bool) {
	if f.double || f.quoted && bytes.IndexByte(f.text, '\r') >= 0 {
		out := f.text[:0]
		for i := 0; i < len(f.text); i++ {
			c := f.text[i]
			switch {
			case c == '"' && i+1 < len(f.text) && f.text[i+1] == '"':
				i++
			case c == '\r':
				if i+1 < len(f.text) && f.text[i+1] == '\n' {
					continue
				}
				c = '\n'
			}
			out = append(out, c)
		}
		f.text, f.double = out, false
	}
	return trimmed(f.text)
}
