package readers

import (
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/htmlindex"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"
)

// encodingName names an encoding; the three that are decided without being asked
// have short names.
type encodingName string

const (
	encUTF8    encodingName = "utf-8"
	encUTF16LE encodingName = "utf-16le"
	encUTF16BE encodingName = "utf-16be"
	encLatin   encodingName = "windows-1252"
)

// title writes an encoding as people do.
func (e encodingName) title() string {
	switch e {
	case encUTF8:
		return "UTF-8"
	case encUTF16LE:
		return "UTF-16LE"
	case encUTF16BE:
		return "UTF-16BE"
	case encLatin:
		return "Windows-1252"
	}
	return string(e)
}

// survey is what one pass over all bytes of a text file tells.
type survey struct {
	sha256   string
	bytes    int64
	encoding encodingName
	mark     int // bytes of the mark at the start
	notes    []string
}

// bytesSeen is what the pass collects.
type bytesSeen struct {
	nul       bool
	badUTF8   bool
	multibyte bool // a valid sequence of two bytes or more
	undefined bool // a byte that Windows-1252 does not define
	filled    bool // anything but line ends and padding
	controls  int
	looked    int // bytes looked at for controls
}

// surveyText reads all bytes once: the digest, the encoding, and whether it is
// text at all.
func surveyText(src source, opt Options, limits Limits) (*survey, error) {
	r, err := src.open()
	if err != nil {
		return nil, err
	}
	sv := &survey{encoding: encUTF8}
	at := Pos{File: src.name}
	digest := sha256.New()
	var seen bytesSeen
	buf := make([]byte, bufferFor(src.size))
	keep := 0 // bytes of a sequence that the last block cut
	for first := true; ; first = false {
		n, err := io.ReadFull(r, buf[keep:])
		end := err == io.EOF || err == io.ErrUnexpectedEOF
		if err != nil && !end {
			return nil, &Error{Pos: at, Msg: "can't be read to its end: " + plainCause(err), Err: err}
		}
		digest.Write(buf[keep : keep+n])
		sv.bytes += int64(n)
		if sv.bytes > limits.File {
			return nil, refuse(at, "has more than %s, and more isn't read: raise it with --limit file=%s", size(limits.File), limitValue(4*limits.File))
		}
		b := buf[:keep+n]
		skip := 0
		if first {
			sv.takeMark(b)
			skip = sv.mark
		}
		keep = seen.look(b[skip:], end)
		if end {
			break
		}
		copy(buf, b[len(b)-keep:])
	}
	sv.sha256 = hex.EncodeToString(digest.Sum(nil))
	if opt.Encoding != "" {
		return sv, sv.given(src, &seen, opt.Encoding)
	}
	return sv, sv.decide(src, &seen)
}

// takeMark knows the marks that tell an encoding.
func (sv *survey) takeMark(b []byte) {
	switch {
	case bytes.HasPrefix(b, []byte("\xef\xbb\xbf")):
		sv.encoding, sv.mark = encUTF8, 3
	case bytes.HasPrefix(b, []byte("\xff\xfe")):
		sv.encoding, sv.mark = encUTF16LE, 2
	case bytes.HasPrefix(b, []byte("\xfe\xff")):
		sv.encoding, sv.mark = encUTF16BE, 2
	}
}

// look goes over one block and gives the number of bytes at its end that belong to
// a sequence which the next block completes.
func (s *bytesSeen) look(b []byte, end bool) (keep int) {
	s.nul = s.nul || bytes.IndexByte(b, 0) >= 0
	if s.looked < sampleLen {
		for _, c := range b {
			if c < ' ' && isControl(rune(c)) {
				s.controls++
			}
			if c > ' ' {
				s.filled = true
			}
		}
		s.looked += len(b)
	} else {
		s.filled = true // a megabyte of blank lines is left to the parser
	}
	if !end {
		keep = cutSequence(b)
	}
	b = b[:len(b)-keep]
	switch {
	case isASCII(b):
	case utf8.Valid(b):
		s.multibyte = true
	default:
		s.lookClosely(b)
	}
	return keep
}

// lookClosely goes over a block that is not UTF-8 throughout.
func (s *bytesSeen) lookClosely(b []byte) {
	for i := 0; i < len(b); {
		if b[i] < utf8.RuneSelf {
			i++
			continue
		}
		r, n := utf8.DecodeRune(b[i:])
		if r != utf8.RuneError || n > 1 {
			s.multibyte = true
			i += n
			continue
		}
		s.badUTF8 = true
		switch b[i] {
		case 0x81, 0x8d, 0x8f, 0x90, 0x9d:
			s.undefined = true
		}
		i++
	}
}

// isASCII looks at eight bytes at a time.
func isASCII(b []byte) bool {
	for len(b) >= 8 {
		if binary.LittleEndian.Uint64(b)&0x8080808080808080 != 0 {
			return false
		}
		b = b[8:]
	}
	for _, c := range b {
		if c >= utf8.RuneSelf {
			return false
		}
	}
	return true
}

// cutSequence counts the bytes at the end of b that start a sequence without
// ending it.
func cutSequence(b []byte) int {
	for i := 1; i <= min(3, len(b)); i++ {
		c := b[len(b)-i]
		if c < utf8.RuneSelf {
			return 0
		}
		if c >= 0xc0 {
			if utf8.FullRune(b[len(b)-i:]) {
				return 0
			}
			return i
		}
	}
	return 0
}

// decide chooses the encoding of a text without being told.
func (sv *survey) decide(src source, seen *bytesSeen) error {
	if sv.encoding != encUTF8 {
		return nil
	}
	if err := sv.mustBeText(src, seen); err != nil {
		return err
	}
	if !seen.badUTF8 {
		return nil
	}
	if sv.mark == 0 && !seen.multibyte && !seen.undefined {
		sv.encoding = encLatin
		sv.notes = append(sv.notes, "the file is not UTF-8; it was read as Windows-1252")
		return nil
	}
	line, err := lineOf(src, firstInvalid)
	if err != nil {
		return err
	}
	at := Pos{File: src.name, Row: line}
	if seen.multibyte || sv.mark > 0 {
		return refuse(at, "is not UTF-8, while other lines are: save the file in one encoding, or name it with --encoding")
	}
	return refuse(at, "is neither UTF-8 nor Windows-1252: name the encoding with --encoding")
}

// mustBeText refuses bytes that no text in a byte encoding has.
func (sv *survey) mustBeText(src source, seen *bytesSeen) error {
	at := Pos{File: src.name}
	var err error
	switch {
	case seen.nul:
		if at.Row, err = lineOf(src, func(b []byte) int { return bytes.IndexByte(b, 0) }); err != nil {
			return err
		}
		return refuse(Pos{File: src.name}, "line %d holds NUL bytes: not text, or UTF-16 without its mark; try --encoding", at.Row)
	case !seen.filled:
		return refuse(at, "is empty: it has blank lines only")
	case 100*seen.controls > seen.looked:
		if at.Row, err = lineOf(src, func(b []byte) int { return bytes.IndexFunc(b, isControl) }); err != nil {
			return err
		}
		return refuse(at, "holds control characters, and more than one character in a hundred is one: not text")
	}
	return nil
}

func isControl(r rune) bool {
	return r < ' ' && r != '\t' && r != '\n' && r != '\r' && r != '\f'
}

// firstInvalid gives the first byte that is not UTF-8, -1 when there is none.
func firstInvalid(b []byte) int {
	for i := 0; i < len(b); {
		r, n := utf8.DecodeRune(b[i:])
		if r == utf8.RuneError && n == 1 {
			return i
		}
		i += n
	}
	return -1
}

// lineOf gives the line of the first byte that a test finds, 0 when it finds none.
// It is asked only when a file is about to be refused.
func lineOf(src source, test func([]byte) int) (int, error) {
	r, err := src.open()
	if err != nil {
		return 0, err
	}
	buf := make([]byte, 1<<16)
	line, keep, afterCR := 1, 0, false
	for {
		n, err := io.ReadFull(r, buf[keep:])
		end := err == io.EOF || err == io.ErrUnexpectedEOF
		if err != nil && !end {
			return 0, &Error{Pos: Pos{File: src.name}, Msg: "can't be read: " + plainCause(err), Err: err}
		}
		b := buf[:keep+n]
		keep = 0
		if !end {
			keep = cutSequence(b)
		}
		block := b[:len(b)-keep]
		i := test(block)
		stop := i
		if i < 0 {
			stop = len(block)
		}
		line += countBreaks(block[:stop])
		if afterCR && stop > 0 && block[0] == '\n' {
			line--
		}
		if i >= 0 {
			return line, nil
		}
		if end {
			return 0, nil
		}
		if len(block) > 0 {
			afterCR = block[len(block)-1] == '\r'
		}
		copy(buf, b[len(block):])
	}
}

// given takes the encoding that the user names.
func (sv *survey) given(src source, seen *bytesSeen, name string) error {
	mark, marked := sv.encoding, sv.mark > 0
	switch strings.ToLower(name) {
	case "utf-8", "utf8":
		sv.encoding = encUTF8
	case "utf-16", "utf16":
		if marked && mark != encUTF8 {
			return nil
		}
		sv.encoding = encUTF16LE
	default:
		if _, err := encodingByName(name); err != nil {
			return refuse(Pos{File: src.name}, "there is no encoding %q here: give a name such as utf-8, windows-1252, utf-16le, shift_jis", name)
		}
		sv.encoding = encodingName(strings.ToLower(name))
	}
	if marked && mark != sv.encoding {
		// The mark is part of the text in no encoding but its own.
		return refuse(Pos{File: src.name}, "starts with the mark of %s, so it is not %s: leave --encoding out", mark.title(), sv.encoding.title())
	}
	if sv.encoding != encUTF8 {
		return nil
	}
	if err := sv.mustBeText(src, seen); err != nil {
		return err
	}
	line, err := lineOf(src, firstInvalid)
	if err != nil || line == 0 {
		return err
	}
	return refuse(Pos{File: src.name, Row: line}, "is not UTF-8: name another encoding with --encoding")
}

func encodingByName(name string) (encoding.Encoding, error) {
	switch encodingName(strings.ToLower(name)) {
	case encLatin:
		return charmap.Windows1252, nil
	case encUTF16LE:
		return unicode.UTF16(unicode.LittleEndian, unicode.IgnoreBOM), nil
	case encUTF16BE:
		return unicode.UTF16(unicode.BigEndian, unicode.IgnoreBOM), nil
	}
	e, err := htmlindex.Get(name)
	if err != nil {
		return nil, fmt.Errorf("encoding %q: %w", name, err)
	}
	return e, nil
}

// text gives the file as UTF-8 without its mark.
func (s *source) text(sv *survey) (io.Reader, error) {
	r, err := s.open()
	if err != nil {
		return nil, err
	}
	if _, err := io.CopyN(io.Discard, r, int64(sv.mark)); err != nil {
		return nil, &Error{Pos: Pos{File: s.name}, Msg: "can't be read: " + plainCause(err), Err: err}
	}
	if sv.encoding == encUTF8 {
		return r, nil
	}
	e, err := encodingByName(string(sv.encoding))
	if err != nil {
		return nil, err
	}
	return &decoded{r: transform.NewReader(r, e.NewDecoder()), file: s.name, encoding: sv.encoding, line: 1}, nil
}

// decoded passes on decoded text and stops at the first character that could not
// be decoded: the decoders put U+FFFD there without a word.
type decoded struct {
	r        io.Reader
	file     string
	encoding encodingName
	line     int
	afterCR  bool   // the last block ended with CR
	tail     []byte // the last bytes of it
}

func (d *decoded) Read(p []byte) (int, error) {
	n, err := d.r.Read(p)
	b := p[:n]
	// The three bytes of U+FFFD may be spread over two blocks.
	d.tail = append(d.tail, b[:min(2, n)]...)
	bad := bytes.Index(d.tail, []byte("\ufffd"))
	if bad >= 0 {
		bad = 0
	} else {
		bad = bytes.Index(b, []byte("\ufffd"))
	}
	nul := bytes.IndexByte(b, 0)
	switch {
	case bad >= 0 && (nul < 0 || bad < nul):
		return 0, refuse(Pos{File: d.file, Row: d.breaks(b[:bad])}, "holds a character that %s does not have: name another encoding with --encoding", d.encoding.title())
	case nul >= 0:
		return 0, refuse(Pos{File: d.file, Row: d.breaks(b[:nul])}, "holds NUL characters when read as %s: not text, or another encoding; try --encoding", d.encoding.title())
	}
	d.line = d.breaks(b)
	if n > 0 {
		d.afterCR = b[n-1] == '\r'
		if n >= 2 {
			d.tail = append(d.tail[:0], b[n-2:]...)
		} else {
			d.tail = d.tail[max(0, len(d.tail)-2):]
		}
	}
	return n, err
}

// breaks gives the line after the breaks in b; a line feed that completes the
// break of the last block is none.
func (d *decoded) breaks(b []byte) int {
	n := d.line + countBreaks(b)
	if d.afterCR && len(b) > 0 && b[0] == '\n' {
		n--
	}
	return n
}

// unchanged makes sure that what was parsed is what was surveyed.
func (s *source) unchanged(sv *survey) error {
	if s.file == nil {
		return nil
	}
	info, err := s.file.Stat()
	if err == nil && info.Size() != sv.bytes {
		return refuse(Pos{File: s.name}, "changed while it was read: read it again when nothing writes to it")
	}
	return nil
}
