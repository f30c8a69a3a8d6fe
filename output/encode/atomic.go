package encode

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
)

// WriteFile makes the file path with what write writes: whole, or not at all. The bytes go to a temporary name in the same
// folder, are synced and then take the name, so that no reader and no crash meets half a file. After any error, or a panic in write, the
// temporary file is gone and an earlier file of that name is as it was.
//
// The folder must exist. A link is followed. A character device is written to in place; what is neither that nor an ordinary file (a
// pipe, whose opening would wait for a reader; a socket) is left alone, with an error. Errors name the path.
func WriteFile(path string, write func(io.Writer) error) error {
	if err := writeFile(path, write); err != nil {
		return fmt.Errorf("%s: %w", path, cause(err))
	}
	return nil
}

func writeFile(path string, write func(io.Writer) error) error {
	mode := fs.FileMode(0o666) // less the process's mask
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		return errors.New("is a folder")
	case err == nil && info.Mode()&fs.ModeNamedPipe != 0:
		return errors.New("is a pipe, not a file")
	case err == nil && info.Mode()&fs.ModeCharDevice != 0:
		f, err := os.OpenFile(path, os.O_WRONLY, 0)
		if err != nil {
			return err
		}
		return finish(f, write, false)
	case err == nil && !info.Mode().IsRegular():
		return errors.New("is no ordinary file")
	case err == nil:
		if path, err = filepath.EvalSymlinks(path); err != nil {
			return err
		}
		mode = info.Mode().Perm()
	case !errors.Is(err, fs.ErrNotExist):
		return err
	}
	folder := filepath.Dir(path)
	if info, err := os.Stat(folder); err != nil {
		return fmt.Errorf("folder %s: %w", folder, cause(err))
	} else if !info.IsDir() {
		return fmt.Errorf("%s is no folder", folder)
	}
	f, err := createTemporary(path, mode)
	if err != nil {
		return err
	}
	done := false
	defer func() {
		if !done {
			f.Close() // closed already but after a panic; the error of a second close says nothing
			os.Remove(f.Name())
		}
	}()
	if err := finish(f, write, true); err != nil {
		return err
	}
	if err := os.Rename(f.Name(), path); err != nil {
		return err
	}
	done = true
	syncFolder(folder)
	return nil
}

// createTemporary opens a new file beside path, with a name that no listing of pictures takes for one.
func createTemporary(path string, mode fs.FileMode) (*os.File, error) {
	folder, base := filepath.Split(path)
	for n := 0; ; n++ {
		name := folder + "." + base + ".part" + strconv.Itoa(os.Getpid()) + "-" + strconv.Itoa(n)
		f, err := os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode)
		if errors.Is(err, fs.ErrExist) && n < 10_000 {
			continue
		}
		return f, err
	}
}

// finish writes through a buffer, syncs where asked and closes, and returns the first error of these.
func finish(f *os.File, write func(io.Writer) error, sync bool) error {
	b := bufio.NewWriterSize(plainErrors{f}, 64<<10)
	err := write(b)
	if err == nil {
		err = b.Flush()
	}
	if err == nil && sync {
		err = f.Sync()
	}
	if closeErr := f.Close(); err == nil {
		err = closeErr
	}
	return err
}

// syncFolder makes the new name last through a power cut, on systems where a folder can be synced; elsewhere it does nothing.
func syncFolder(folder string) {
	if d, err := os.Open(folder); err == nil {
		d.Sync()
		d.Close()
	}
}

// plainErrors is a file whose errors do not say its name, which is a temporary one that would tell a user nothing.
type plainErrors struct{ f *os.File }

func (p plainErrors) Write(b []byte) (int, error) {
	n, err := p.f.Write(b)
	return n, cause(err)
}

// cause takes the operation and the name off an error of package os.
func cause(err error) error {
	switch e := err.(type) {
	case *fs.PathError:
		return e.Err
	case *os.LinkError:
		return e.Err
	}
	return err
}
