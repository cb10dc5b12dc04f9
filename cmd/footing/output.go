package main

import (
	"archive/zip"
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"footing/audit/figure"
	"footing/audit/report"
)

// output is one file that a run will write.
type output struct {
	path  string       // as it was given
	place string       // where it is written: links followed
	form  *report.Form // nil for a marked workbook and for figures
	text  []byte       // what it will hold
}

// outputs are the files of one run. They are all checked before the first is
// written.
type outputs struct {
	force bool
	input fs.FileInfo // of what is audited; nil when it is no file
	taken []*output
	made  string // a folder that is to be made first; "" for none
}

// parseOutput reads --output: FORMAT=FILE, or FILE whose extension names the
// format; else the format is the one that --format gives.
func parseOutput(value string, given *report.Form) (*report.Form, string, error) {
	if name, path, found := strings.Cut(value, "="); found {
		if form := report.FormNamed(name); form != nil {
			if path == "" {
				return nil, "", fmt.Errorf("--output is %q; give a file behind the =", value)
			}
			return form, path, nil
		}
	}
	switch form := report.FormOf(value); {
	case value == "":
		return nil, "", fmt.Errorf("--output is empty; give a file")
	case form != nil:
		return form, value, nil
	case given != nil:
		return given, value, nil
	}
	return nil, "", fmt.Errorf("--output is %q, and its extension names no form; write it as FORMAT=FILE, with one of %s", value, strings.Join(report.FormNames(), ", "))
}

// inputOf finds what is audited, so that it is never written to.
func inputOf(cmd *cobra.Command, file string) fs.FileInfo {
	if file == "-" {
		f, ok := cmd.InOrStdin().(*os.File)
		if !ok {
			return nil
		}
		info, err := f.Stat()
		if err != nil || !info.Mode().IsRegular() {
			return nil
		}
		return info
	}
	info, err := os.Stat(file)
	if err != nil {
		return nil // reading it will say so
	}
	return info
}

// add checks a file that is to be written and takes it on.
func (o *outputs) add(flag, path string, form *report.Form) error {
	place, err := o.placeOf(flag, path)
	if err != nil {
		return err
	}
	for _, other := range o.taken {
		if other.place == place {
			return fmt.Errorf("%s %s is given twice; give each report a file of its own", flag, path)
		}
	}
	o.taken = append(o.taken, &output{path: path, place: place, form: form})
	return nil
}

// addFigure takes on a figure that is to be written to a folder, which is made
// when it is not there.
func (o *outputs) addFigure(folder string, drawn figure.Figure) error {
	path := filepath.Join(folder, drawn.Name+".svg")
	if _, err := os.Stat(folder); errors.Is(err, fs.ErrNotExist) {
		o.made = folder
		o.taken = append(o.taken, &output{path: path, place: path, text: report.Figure(drawn.SVG)})
		return nil
	}
	if err := o.add("--figures", path, nil); err != nil {
		return err
	}
	o.taken[len(o.taken)-1].text = report.Figure(drawn.SVG)
	return nil
}

// placeOf follows links and refuses what may not be replaced.
func (o *outputs) placeOf(flag, path string) (string, error) {
	refuse := func(format string, values ...any) (string, error) {
		return "", fmt.Errorf("%s %s: %s; nothing was written", flag, path, fmt.Sprintf(format, values...))
	}
	folder, err := filepath.EvalSymlinks(filepath.Dir(path))
	if err != nil {
		return refuse("the folder does not exist or can't be opened")
	}
	if folder, err = filepath.Abs(folder); err != nil {
		return refuse("%v", err)
	}
	place := filepath.Join(folder, filepath.Base(path))
	link, err := os.Lstat(place)
	if errors.Is(err, fs.ErrNotExist) {
		return place, nil
	}
	if err != nil {
		return refuse("%v", cause(err))
	}
	if link.Mode()&fs.ModeSymlink != 0 {
		if place, err = filepath.EvalSymlinks(place); err != nil {
			return refuse("is a link that leads nowhere")
		}
	}
	info, err := os.Stat(place)
	switch {
	case err != nil:
		return refuse("%v", cause(err))
	case o.input != nil && os.SameFile(info, o.input):
		return refuse("is the table that is audited, which footing never writes to")
	case info.IsDir():
		return refuse("is a folder")
	case !info.Mode().IsRegular():
		return refuse("is not a file that can be replaced")
	case o.force:
		return place, nil
	}
	ours, err := writtenHere(place)
	switch {
	case err != nil:
		return refuse("%v", cause(err))
	case !ours:
		return refuse("is there already and footing did not write it; give another name, or --force to replace it")
	}
	return place, nil
}

// cause leaves the path out of an error that names it.
func cause(err error) error {
	var p *fs.PathError
	if errors.As(err, &p) {
		return p.Err
	}
	return err
}

// writtenHere reports whether footing wrote a file before, as the file itself
// tells.
func writtenHere(path string) (bool, error) {
	f, err := os.Open(path)
	if err != nil {
		return false, err
	}
	defer f.Close()
	head := make([]byte, report.HeadLength)
	n, err := io.ReadFull(f, head)
	if err != nil && err != io.EOF && err != io.ErrUnexpectedEOF {
		return false, err
	}
	if report.WrittenHere(head[:n]) {
		return true, nil
	}
	if !bytes.HasPrefix(head[:n], []byte("PK")) {
		return false, nil
	}
	info, err := f.Stat()
	if err != nil {
		return false, err
	}
	archive, err := zip.NewReader(f, info.Size())
	if err != nil {
		return false, nil // no workbook, hence none of ours
	}
	return report.MarkedHere(archive), nil
}

// commit writes every file beside its place and, once all are whole, puts each
// in its place. After an error none of the files that were to be made is there
// and none that was there has changed, unless the system failed between two
// renames.
func (o *outputs) commit() error {
	if o.made != "" {
		if err := os.MkdirAll(o.made, 0o777); err != nil {
			return fmt.Errorf("--figures %s: can't be made: %w; nothing was written", o.made, cause(err))
		}
	}
	var parts []string
	defer func() {
		for _, part := range parts {
			os.Remove(part) // gone already where all went well
		}
	}()
	for _, out := range o.taken {
		part, err := writePart(out)
		if part != "" {
			parts = append(parts, part)
		}
		if err != nil {
			return fmt.Errorf("%s: can't be written: %w; nothing was written", out.path, cause(err))
		}
	}
	for k, out := range o.taken {
		if err := os.Rename(parts[k], out.place); err != nil {
			return fmt.Errorf("%s: can't be put in its place: %w", out.path, err)
		}
	}
	return nil
}

// writePart writes a file under a passing name in the folder where it will stay.
func writePart(out *output) (string, error) {
	mode := fs.FileMode(0o666)
	if info, err := os.Stat(out.place); err == nil {
		mode = info.Mode().Perm()
	}
	for try := 0; ; try++ {
		part := filepath.Join(filepath.Dir(out.place), fmt.Sprintf(".%s.%d.%d.part", filepath.Base(out.place), os.Getpid(), try))
		f, err := os.OpenFile(part, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode)
		if errors.Is(err, fs.ErrExist) && try < 100 {
			continue
		}
		if err != nil {
			return "", err
		}
		_, err = f.Write(out.text)
		return part, errors.Join(err, f.Close())
	}
}
