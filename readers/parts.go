package readers

import (
	"archive/zip"
	"bufio"
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"path"
	"strings"
)

// archive is a workbook's zip file: its parts by name, and what may still be
// unpacked of them.
type archive struct {
	file   string
	parts  map[string]*zip.File // by name in lower case
	limits Limits
	left   int64 // bytes that may still be unpacked
}

// openArchive reads the directory of a zip file. Sizes that the directory declares
// are held against the limit at once; they may lie, so open counts again.
func openArchive(src *source, limits Limits) (*archive, error) {
	at := Pos{File: src.name}
	z, err := zip.NewReader(src.readerAt(), src.size)
	if err != nil {
		return nil, &Error{Pos: at, Msg: "is a cut or damaged zip archive: save the workbook again", Err: err}
	}
	a := &archive{file: src.name, parts: map[string]*zip.File{}, limits: limits, left: limits.Unpacked}
	var declared uint64
	for _, f := range z.File {
		if strings.HasSuffix(f.Name, "/") {
			continue
		}
		name := partName(f.Name)
		if a.parts[name] != nil {
			return nil, refuse(at, "holds the part %q twice: save the workbook again", strings.TrimPrefix(name, "/"))
		}
		a.parts[name] = f
		if declared += f.UncompressedSize64; declared > uint64(limits.Unpacked) {
			return nil, a.tooLarge(int64(min(declared, 1<<62)))
		}
	}
	return a, nil
}

// partName makes names of parts comparable: rooted, cleaned, in lower case.
func partName(name string) string {
	return strings.ToLower(path.Clean("/" + strings.ReplaceAll(name, `\`, "/")))
}

func (a *archive) tooLarge(n int64) error {
	if n == 0 {
		return refuse(Pos{File: a.file}, "has more than %s once unpacked, and more isn't read: raise it with --limit unpacked=%s",
			size(a.limits.Unpacked), limitValue(4*a.limits.Unpacked))
	}
	return refuse(Pos{File: a.file}, "has %s once unpacked; more than %s isn't read: raise it with --limit unpacked=%s",
		size(n), size(a.limits.Unpacked), limitValue(n))
}

// has tells whether there is a part of a name.
func (a *archive) has(name string) bool { return a.parts[partName(name)] != nil }

// errUnpacked tells that the parts hold more than the limit.
var errUnpacked = errors.New("parts beyond the limit")

// counted passes on a part and counts what comes out of it.
type counted struct {
	a *archive
	r io.Reader
}

func (c counted) Read(p []byte) (int, error) {
	n, err := c.r.Read(p)
	if c.a.left -= int64(n); c.a.left < 0 {
		return 0, errUnpacked
	}
	return n, err
}

// tagGap is the most bytes between the ends of two tags. The longest text that a
// cell may hold is a tenth of it; without a bound one tag could fill the memory.
const tagGap = 1 << 20

var errGap = errors.New("a tag or text of more than a megabyte")

// guard stops a decoder that reads too far without coming to the end of a token.
type guard struct {
	r     io.Reader
	read  int64
	allow int64
}

func (g *guard) Read(p []byte) (int, error) {
	if g.read > g.allow {
		return 0, errGap
	}
	n, err := g.r.Read(p)
	g.read += int64(n)
	return n, err
}

// pass reads the tokens of one part and holds it to the structure that the
// decoder's fast path does not check: nesting, one root, no document type, nothing
// after the end.
type pass struct {
	a      *archive
	name   string // of the part, as it is in the archive
	sheet  string // the sheet that the part holds, if any
	where  func() string
	body   io.ReadCloser
	guard  *guard
	d      *xml.Decoder
	open   []xml.Name
	rooted bool
}

// openPart starts a pass; where tells how far it has come, for messages.
func (a *archive) openPart(name string, where func() string) (*pass, error) {
	f := a.parts[partName(name)]
	if f == nil {
		return nil, refuse(Pos{File: a.file}, "lacks the part %s: save the workbook again", strings.TrimPrefix(name, "/"))
	}
	body, err := f.Open()
	p := &pass{a: a, name: strings.TrimPrefix(path.Clean("/"+strings.ReplaceAll(f.Name, `\`, "/")), "/"), where: where}
	if err != nil {
		return nil, p.damaged(err)
	}
	p.body = body
	p.guard = &guard{r: counted{a, body}, allow: tagGap}
	p.d = xml.NewDecoder(bufio.NewReaderSize(p.guard, 1<<16))
	p.d.CharsetReader = charsetReader
	return p, nil
}

func (p *pass) close() { p.body.Close() }

// charsetReader decodes the rare part that is not UTF-8.
func charsetReader(label string, r io.Reader) (io.Reader, error) {
	e, err := encodingByName(label)
	if err != nil {
		return nil, err
	}
	return e.NewDecoder().Reader(r), nil
}

// next gives the next start, end or text of the part; nil at its end.
func (p *pass) next() (xml.Token, error) {
	for {
		t, err := p.d.RawToken()
		if err == io.EOF {
			if len(p.open) > 0 || !p.rooted {
				return nil, p.damaged(io.ErrUnexpectedEOF)
			}
			return nil, nil
		}
		if err != nil {
			return nil, p.damaged(err)
		}
		p.guard.allow = p.d.InputOffset() + tagGap
		switch e := t.(type) {
		case xml.StartElement:
			if len(p.open) == 0 && p.rooted {
				return nil, p.broken("has an element after its end")
			}
			p.rooted = true
			p.open = append(p.open, e.Name)
			return t, nil
		case xml.EndElement:
			n := len(p.open)
			if n == 0 || p.open[n-1] != e.Name {
				return nil, p.broken("is badly nested")
			}
			p.open = p.open[:n-1]
			return t, nil
		case xml.CharData:
			if len(p.open) > 0 {
				return t, nil
			}
			if len(bytes.TrimFunc(e, isPadding)) > 0 {
				return nil, p.broken("has text outside its root")
			}
		case xml.Directive:
			return nil, p.broken("has a document type declaration, which no workbook needs")
		}
	}
}

// parent gives the local name of the element around the current one; "" at the root.
func (p *pass) parent() string {
	if n := len(p.open); n > 1 {
		return p.open[n-2].Local
	}
	return ""
}

// in gives the local name of the innermost open element.
func (p *pass) in() string {
	if n := len(p.open); n > 0 {
		return p.open[n-1].Local
	}
	return ""
}

// place says how far the pass has come: " after row 18", or nothing.
func (p *pass) place() string {
	if p.where == nil {
		return ""
	}
	return p.where()
}

// broken refuses the part for a fault of its structure.
func (p *pass) broken(what string) error {
	return refuse(Pos{File: p.a.file, Sheet: p.sheet}, "%s %s%s: save the workbook again, or take an older copy", p.name, what, p.place())
}

// damaged refuses the part for an error of the decoder or the archive.
func (p *pass) damaged(err error) error {
	var syntax *xml.SyntaxError
	what := "is damaged"
	switch {
	case errors.Is(err, errUnpacked):
		return p.a.tooLarge(0)
	case errors.Is(err, errGap):
		what = "has a tag or a text of more than 1 MiB"
	case errors.Is(err, io.ErrUnexpectedEOF), errors.As(err, &syntax) && syntax.Msg == "unexpected EOF":
		what = "is cut off"
	}
	return &Error{
		Pos: Pos{File: p.a.file, Sheet: p.sheet}, Err: err,
		Msg: p.name + " " + what + p.place() + ": save the workbook again, or take an older copy",
	}
}

// whole reads a part to its end and gives its bytes, checked for structure.
func (a *archive) whole(name string) ([]byte, error) {
	p, err := a.openPart(name, nil)
	if err != nil {
		return nil, err
	}
	defer p.close()
	var copied bytes.Buffer
	p.guard.r = io.TeeReader(p.guard.r, &copied)
	for {
		t, err := p.next()
		if err != nil {
			return nil, err
		}
		if t == nil {
			return copied.Bytes(), nil
		}
	}
}

// attr gives an attribute by its local name, "" when it is not there.
func attr(e xml.StartElement, name string) string {
	for i := range e.Attr {
		if e.Attr[i].Name.Local == name {
			return e.Attr[i].Value
		}
	}
	return ""
}

// truth reads an attribute of the kind 1, true, on.
func truth(s string) bool { return s == "1" || s == "true" || s == "on" }
