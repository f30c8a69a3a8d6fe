package host

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"

	"lampbook/lua/bind"
)

// Files reads what a scene may read: regular files in the scene's own folder and in the folders given with --assets. Links are
// followed inside a folder, never out of it. It holds nothing open and may be shared.
type Files struct {
	roots []root // the scene's folder first
	most  int64  // bytes of one file
}

// root is a folder.
type root struct {
	dir string // as given, slash-separated, clean
	abs string // absolute, links resolved
}

// inside opens the folder for as long as work takes: all that happens there stays within it, whatever links say.
func (r root) inside(work func(folder *os.Root) error) error {
	folder, err := os.OpenRoot(r.abs)
	if err != nil {
		return err
	}
	defer folder.Close()
	return work(folder)
}

// OpenFiles finds the scene's folder and the further ones. most is the size that one file may have, in bytes.
func OpenFiles(sceneDir string, assets []string, most int64) (*Files, error) {
	f := &Files{most: most}
	for i, dir := range append([]string{sceneDir}, assets...) {
		what := "the scene's folder"
		if i > 0 {
			what = "--assets"
		}
		abs, err := filepath.Abs(dir)
		if err == nil {
			abs, err = filepath.EvalSymlinks(abs)
		}
		r := root{dir: path.Clean(filepath.ToSlash(dir)), abs: abs}
		if err == nil {
			err = r.inside(func(*os.Root) error { return nil })
		}
		if err != nil {
			return nil, &Error{Msg: fmt.Sprintf("%s %s: %s", what, dir, reason(err)), Cause: err}
		}
		f.roots = append(f.roots, r)
	}
	return f, nil
}

// Find returns where a path written in the scene leads: relative to the scene's folder or, where nothing is there, to the folders given
// with --assets in their order; absolute paths must lie in one of them. The result is slash-separated, as the scene's own path was given.
func (f *Files) Find(name string) (string, error) {
	if err := proper(name); err != nil {
		return "", err
	}
	name = filepath.ToSlash(name)
	if filepath.IsAbs(filepath.FromSlash(name)) || path.IsAbs(name) || leaves(name) {
		return f.locate(name)
	}
	var first error
	for _, r := range f.roots {
		err := r.regular(name)
		if err == nil {
			return path.Join(r.dir, name), nil
		}
		if !errors.Is(err, fs.ErrNotExist) {
			return "", f.complain(name, err)
		}
		if first == nil {
			first = err
		}
	}
	return "", f.complain(name, first)
}

// Read returns the content of a file that Find gave, or of one that such a file names, by the same rules.
func (f *Files) Read(file string) ([]byte, error) {
	if err := proper(file); err != nil {
		return nil, err
	}
	r, rel, err := f.holder(file)
	if err != nil {
		return nil, err
	}
	var text []byte
	err = r.inside(func(folder *os.Root) error {
		if err := regular(folder, rel); err != nil {
			return err
		}
		in, err := folder.Open(filepath.FromSlash(rel))
		if err != nil {
			return err
		}
		defer in.Close()
		if info, err := in.Stat(); err != nil || !info.Mode().IsRegular() {
			return errIrregular
		}
		text, err = io.ReadAll(io.LimitReader(in, f.most+1))
		return err
	})
	if err != nil {
		return nil, f.complain(file, err)
	}
	if int64(len(text)) > f.most {
		return nil, fmt.Errorf("%s: the file is larger than %s bytes", plain(file), grouped(f.most))
	}
	return text, nil
}

// locate is Find for a path that is absolute or climbs out of the scene's folder.
func (f *Files) locate(name string) (string, error) {
	full := name
	if !filepath.IsAbs(filepath.FromSlash(name)) {
		full = path.Join(f.roots[0].dir, name)
	}
	r, rel, err := f.holder(full)
	if err != nil {
		return "", err
	}
	if err := r.regular(rel); err != nil {
		return "", f.complain(name, err)
	}
	return path.Join(r.dir, rel), nil
}

// holder returns the folder that a path lies in, and the path inside it.
func (f *Files) holder(file string) (root, string, error) {
	abs, err := filepath.Abs(filepath.FromSlash(file))
	if err != nil {
		return root{}, "", f.complain(file, err)
	}
	for _, r := range f.roots {
		for _, base := range []string{r.abs, absolute(r.dir)} {
			rel, err := filepath.Rel(base, abs)
			if err == nil && !leaves(filepath.ToSlash(rel)) {
				return r, filepath.ToSlash(rel), nil
			}
		}
	}
	return root{}, "", f.complain(file, errOutside)
}

// absolute is a folder's absolute path with links unresolved; "" where the working directory is gone.
func absolute(dir string) string {
	abs, err := filepath.Abs(filepath.FromSlash(dir))
	if err != nil {
		return ""
	}
	return abs
}

// leaves reports whether a relative path climbs out of where it starts.
func leaves(name string) bool {
	clean := path.Clean(name)
	return clean == ".." || strings.HasPrefix(clean, "../")
}

var (
	errOutside   = errors.New("outside the folders that the scene may read from")
	errIrregular = errors.New("not a regular file")
)

// regular checks that a path inside the folder leads to a regular file.
func (r root) regular(rel string) error {
	return r.inside(func(folder *os.Root) error { return regular(folder, rel) })
}

// regular does so without opening the file: a pipe would wait for ever.
func regular(folder *os.Root, rel string) error {
	info, err := folder.Stat(filepath.FromSlash(rel))
	if err != nil {
		return err
	}
	if info.IsDir() {
		return errors.New("a folder, not a file")
	}
	if !info.Mode().IsRegular() {
		return errIrregular
	}
	return nil
}

// proper refuses what cannot be a path.
func proper(name string) error {
	switch {
	case name == "":
		return errors.New("the path is empty")
	case len(name) > 4096:
		return errors.New("the path is longer than 4096 bytes")
	case strings.ContainsRune(name, 0):
		return errors.New("the path holds a zero byte")
	}
	return nil
}

// complain says what is wrong with a path and what would help.
func (f *Files) complain(name string, err error) error {
	shown := plain(name)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		where := "beside the scene"
		if dir := f.roots[0].dir; dir != "." {
			where += ", in " + dir
		}
		if len(f.roots) > 1 {
			where += ", nor in --assets"
		}
		return fmt.Errorf("%s: no such file %s%s%w", shown, where, f.similar(name), quiet{err})
	case errors.Is(err, errOutside), escapes(err):
		return fmt.Errorf("%s: lies outside the folders that the scene may read from (%s); --assets DIR adds one", shown, f.folders())
	}
	return fmt.Errorf("%s: %s", shown, reason(err))
}

// quiet keeps an error for errors.Is without its text.
type quiet struct{ error }

func (quiet) Error() string   { return "" }
func (q quiet) Unwrap() error { return q.error }

// escapes recognises the refusal of os.Root, which has no name of its own.
func escapes(err error) bool {
	var p *fs.PathError
	return errors.As(err, &p) && strings.Contains(p.Err.Error(), "escapes")
}

// reason is the core of an error of the system, without the path.
func reason(err error) string {
	var p *fs.PathError
	if errors.As(err, &p) {
		return p.Err.Error()
	}
	return err.Error()
}

func (f *Files) folders() string {
	var all []string
	for _, r := range f.roots {
		all = append(all, r.dir)
	}
	return strings.Join(all, ", ")
}

// similar hints at the file of the same folder whose name is nearest.
func (f *Files) similar(name string) string {
	dir := path.Dir(filepath.ToSlash(name))
	if path.IsAbs(dir) || leaves(dir) {
		return ""
	}
	var known []string
	for _, r := range f.roots {
		known = append(known, r.list(dir)...)
	}
	for i, file := range known {
		known[i] = path.Join(dir, file)
	}
	return bind.Guess(path.Clean(filepath.ToSlash(name)), known)
}

// modules lists the modules in a folder, as require names them.
func (f *Files) modules(dir string) []string {
	var names []string
	for _, r := range f.roots {
		for _, file := range r.list(dir) {
			if name, ok := strings.CutSuffix(file, ".lua"); ok {
				names = append(names, strings.ReplaceAll(path.Join(dir, name), "/", "."))
			}
		}
	}
	slices.Sort(names)
	return slices.Compact(names)
}

// list returns the names of the regular files in a folder, sorted, at most a thousand; none where the folder cannot be read.
func (r root) list(dir string) []string {
	var names []string
	err := r.inside(func(folder *os.Root) error {
		name := filepath.FromSlash(dir)
		if info, err := folder.Stat(name); err != nil || !info.IsDir() {
			return err
		}
		d, err := folder.Open(name)
		if err != nil {
			return err
		}
		defer d.Close()
		entries, err := d.ReadDir(1000)
		for _, e := range entries {
			if e.Type().IsRegular() {
				names = append(names, e.Name())
			}
		}
		return err
	})
	if err != nil && !errors.Is(err, io.EOF) {
		return nil
	}
	slices.Sort(names)
	return names
}
