package readers

import (
	"bytes"
	"io"
)

// identity is what the first bytes of a file say it is.
type identity struct {
	workbook bool
	refusal  string // set when it is neither text nor a workbook
}

// identify looks at the bytes alone. Whether a text is readable text is a later
// question.
func identify(src *source) (identity, error) {
	head, err := src.head(1 << 12)
	if err != nil {
		return identity{}, err
	}
	switch {
	case len(head) == 0:
		return identity{refusal: "is empty"}, nil
	case bytes.HasPrefix(head, []byte("PK\x03\x04")):
		return identifyZip(src)
	case bytes.HasPrefix(head, []byte("PK\x05\x06")):
		return identity{refusal: "is an empty zip archive"}, nil
	case bytes.HasPrefix(head, []byte("\xd0\xcf\x11\xe0")):
		return identifyCompound(src)
	}
	if what := markOf(head); what != "" {
		return identity{refusal: what}, nil
	}
	return identity{}, nil
}

// markOf knows the first bytes of files that people take for tables by mistake.
func markOf(head []byte) string {
	starts := func(mark string) bool { return bytes.HasPrefix(head, []byte(mark)) }
	switch {
	case starts("\x1f\x8b"):
		return "is gzip-compressed: unpack it first"
	case starts("BZh") && len(head) > 9 && bytes.Equal(head[4:8], []byte("1AY&")):
		return "is bzip2-compressed: unpack it first"
	case starts("\xfd7zXZ\x00"):
		return "is xz-compressed: unpack it first"
	case starts("\x28\xb5\x2f\xfd"):
		return "is zstd-compressed: unpack it first"
	case starts("7z\xbc\xaf\x27\x1c"):
		return "is a 7z archive: unpack it first"
	case starts("Rar!\x1a\x07"):
		return "is a RAR archive: unpack it first"
	case starts("%PDF"):
		return "is a PDF document, not a table: save the table as CSV or .xlsx"
	case starts("\x89PNG"):
		return "is a PNG picture, not text"
	case starts("\xff\xd8\xff"):
		return "is a JPEG picture, not text"
	case starts("GIF87a"), starts("GIF89a"):
		return "is a GIF picture, not text"
	case starts("II*\x00"), starts("MM\x00*"):
		return "is a TIFF picture, not text"
	case starts("RIFF") && len(head) >= 12 && string(head[8:12]) == "WEBP":
		return "is a WebP picture, not text"
	case starts("SQLite format 3\x00"):
		return "is an SQLite database: export the table as CSV"
	case starts("PAR1"):
		return "is a Parquet file: export the table as CSV"
	case starts("\x89HDF"):
		return "is an HDF5 file: export the table as CSV"
	case starts("{\\rtf"):
		return "is an RTF document, not a table: save the table as CSV or .xlsx"
	case starts("\x7fELF"), starts("MZ\x90\x00"):
		return "is a program, not a table"
	}
	return markupOf(head)
}

// markupOf tells web pages and other markup from text that happens to start with
// a less-than sign, such as a value below a limit.
func markupOf(head []byte) string {
	b := bytes.TrimPrefix(head, []byte("\xef\xbb\xbf"))
	b = bytes.TrimLeft(b, " \t\r\n")
	if len(b) == 0 || b[0] != '<' {
		return ""
	}
	b = bytes.ToLower(b)
	for _, tag := range [...]string{"<html", "<!doctype", "<table"} {
		if bytes.HasPrefix(b, []byte(tag)) {
			return "is HTML (a web page), not a table: save it as CSV or .xlsx"
		}
	}
	if bytes.HasPrefix(b, []byte("<?xml")) {
		if bytes.Contains(b, []byte("<html")) {
			return "is HTML (a web page), not a table: save it as CSV or .xlsx"
		}
		return "is XML, not a table: save it as CSV or .xlsx"
	}
	return ""
}

// identifyCompound tells a workbook behind a password from a workbook of the old
// binary format: both come in the same container, which names its streams in
// UTF-16.
func identifyCompound(src *source) (identity, error) {
	r, err := src.open()
	if err != nil {
		return identity{}, err
	}
	has, err := contains(r, utf16Text("EncryptedPackage"))
	if err != nil {
		return identity{}, &Error{Pos: Pos{File: src.name}, Msg: "can't be read: " + plainCause(err), Err: err}
	}
	if has {
		return identity{refusal: "is protected by a password: save it without one"}, nil
	}
	return identity{refusal: "is an old binary workbook (.xls): save it as .xlsx or CSV"}, nil
}

func utf16Text(s string) []byte {
	b := make([]byte, 0, 2*len(s))
	for i := range len(s) {
		b = append(b, s[i], 0)
	}
	return b
}

// contains looks for a short text in a stream.
func contains(r io.Reader, what []byte) (bool, error) {
	buf := make([]byte, 1<<16)
	keep := 0
	for {
		n, err := r.Read(buf[keep:])
		if bytes.Contains(buf[:keep+n], what) {
			return true, nil
		}
		if err == io.EOF {
			return false, nil
		}
		if err != nil {
			return false, err
		}
		n += keep
		keep = copy(buf, buf[max(0, n-len(what)+1):n])
	}
}
