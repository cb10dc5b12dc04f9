package readers

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// Options say how to read; each empty field is decided by the file itself.
type Options struct {
	Sheet     string   // name of a sheet
	Range     string   // A1:F60; rows of a text file are its lines
	HeaderRow string   // "" to look for it, a line or sheet row, or "none"
	Delimiter string   // one character, or "tab"
	Decimal   string   // "." or ","
	Encoding  string   // such as "windows-1252" or "utf-16le"
	Missing   []string // further codes for a missing value, texts or numbers
	Limits    Limits
}

// Open reads a file on disk. Whatever keeps it from being read as one table is an
// *Error; there is never a part of a table.
func Open(path string, opt Options) (*Table, error) {
	at := Pos{File: path}
	info, err := os.Stat(path)
	if err != nil {
		return nil, &Error{Pos: at, Msg: plainCause(err), Err: err}
	}
	if isStreamName(path) && !info.IsDir() {
		f, err := os.Open(path)
		if err != nil {
			return nil, &Error{Pos: at, Msg: "can't be opened: " + plainCause(err), Err: err}
		}
		defer f.Close()
		return readStream(path, "", f, opt)
	}
	switch mode := info.Mode(); {
	case mode.IsDir():
		return nil, refuse(at, "is a folder: give a file in it")
	case mode&fs.ModeNamedPipe != 0:
		return nil, refuse(at, "is a pipe: give the data on standard input with -")
	case mode&fs.ModeSocket != 0:
		return nil, refuse(at, "is a socket, not a file")
	case mode&(fs.ModeDevice|fs.ModeCharDevice) != 0:
		return nil, refuse(at, "is a device, not a file")
	}
	limits := opt.Limits.Default()
	if info.Size() > limits.File {
		return nil, refuse(at, "has %s; more than %s isn't read: raise it with --limit file=%s",
			size(info.Size()), size(limits.File), limitValue(info.Size()))
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, &Error{Pos: at, Msg: "can't be opened: " + plainCause(err), Err: err}
	}
	defer f.Close()
	return read(source{name: path, file: f, size: info.Size()}, filepath.Ext(path), opt)
}

// Read reads a stream to its end, then the table in it. With the name "-" the
// bytes alone decide what it is; any other name must agree with them.
func Read(name string, r io.Reader, opt Options) (*Table, error) {
	ext := filepath.Ext(name)
	if name == "-" {
		ext = ""
	}
	return readStream(name, ext, r, opt)
}

func readStream(name, ext string, r io.Reader, opt Options) (*Table, error) {
	src, err := hold(name, r, opt.Limits.Default())
	if err != nil {
		return nil, err
	}
	return read(src, ext, opt)
}

// isStreamName tells the names under which a system offers open streams.
func isStreamName(path string) bool {
	return path == "/dev/stdin" || strings.HasPrefix(path, "/dev/fd/") || strings.HasPrefix(path, "/proc/self/fd/")
}

// read decides what the bytes are and whether the name agrees; ext is empty when
// there is no name to agree with.
func read(src source, ext string, opt Options) (*Table, error) {
	what, err := identify(&src)
	if err != nil {
		return nil, err
	}
	at := Pos{File: src.name}
	wantsWorkbook := strings.EqualFold(ext, ".xlsx") || strings.EqualFold(ext, ".xlsm")
	switch {
	case what.refusal != "":
		return nil, refuse(at, "%s", what.refusal)
	case what.workbook && ext != "" && !wantsWorkbook:
		return nil, refuse(at, "is a workbook, though its name ends in %s: rename it to end in .xlsx", ext)
	case !what.workbook && wantsWorkbook:
		return nil, refuse(at, "is text, though its name ends in %s: rename it to end in .csv, or save it as a workbook", ext)
	case what.workbook:
		return readWorkbook(src, opt)
	}
	return readText(src, opt)
}

// plainCause says why a file can't be opened without repeating its name.
func plainCause(err error) string {
	var p *fs.PathError
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return "does not exist"
	case errors.Is(err, fs.ErrPermission):
		return "may not be read: permission denied"
	case errors.As(err, &p):
		return p.Err.Error()
	}
	return err.Error()
}
