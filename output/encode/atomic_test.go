package encode

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

// only reports what else than the named files a folder holds.
func only(t *testing.T, dir string, want ...string) {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, e := range entries {
		got = append(got, e.Name())
	}
	if strings.Join(got, " ") != strings.Join(want, " ") {
		t.Errorf("the folder holds %q, want %q", got, want)
	}
}

func say(s string) func(io.Writer) error {
	return func(w io.Writer) error { _, err := io.WriteString(w, s); return err }
}

func contents(t *testing.T, path string) string {
	t.Helper()
	b, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

func TestWriteFile(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "a.png")
	for _, text := range []string{"first", "the second, longer", strings.Repeat("x", 200_000), ""} {
		if err := WriteFile(path, say(text)); err != nil {
			t.Fatal(err)
		}
		if got := contents(t, path); got != text {
			t.Errorf("got %d bytes, want %d", len(got), len(text))
		}
	}
	only(t, dir, "a.png")
}

// TestWriteFileKeepsTheOld: after an error, even one after many bytes, the earlier file stands and nothing else does.
func TestWriteFileKeepsTheOld(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "a.png")
	if err := WriteFile(path, say("good")); err != nil {
		t.Fatal(err)
	}
	broken := errors.New("png: the lamp fell over")
	for _, n := range []int{0, 10, 100_000} {
		err := WriteFile(path, func(w io.Writer) error {
			io.WriteString(w, strings.Repeat("x", n))
			return broken
		})
		if !errors.Is(err, broken) || !strings.HasPrefix(err.Error(), path+": ") {
			t.Errorf("got %v", err)
		}
	}
	func() {
		defer func() {
			if recover() == nil {
				t.Error("the panic was swallowed")
			}
		}()
		WriteFile(path, func(io.Writer) error { panic("a bug") })
	}()
	if contents(t, path) != "good" {
		t.Error("the earlier file is gone")
	}
	only(t, dir, "a.png")
}

func TestWriteFileMode(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("no file modes here")
	}
	path := filepath.Join(t.TempDir(), "a.png")
	if err := os.WriteFile(path, nil, 0o640); err != nil {
		t.Fatal(err)
	}
	if err := WriteFile(path, say("x")); err != nil {
		t.Fatal(err)
	}
	if info, err := os.Stat(path); err != nil || info.Mode().Perm() != 0o640 {
		t.Errorf("mode %v, want that of the file before", info.Mode())
	}
}

func TestWriteFileErrors(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "file")
	if err := os.WriteFile(file, []byte("x"), 0o666); err != nil {
		t.Fatal(err)
	}
	missing := filepath.Join(dir, "frames", "a.png")
	for _, c := range []struct{ path, want string }{
		{missing, missing + ": folder " + filepath.Dir(missing) + ": no such file or directory"},
		{dir, dir + ": is a folder"},
		{filepath.Join(file, "a.png"), "file"},
	} {
		err := WriteFile(c.path, say("x"))
		if err == nil || !strings.Contains(err.Error(), c.want) || strings.Contains(err.Error(), ".part") {
			t.Errorf("%s: got %v, want an error with %q", c.path, err, c.want)
		}
	}
	only(t, dir, "file")
}

// TestWriteFileDenied makes a folder unwritable. The superuser writes everywhere, so there it shows nothing.
func TestWriteFileDenied(t *testing.T) {
	if runtime.GOOS == "windows" || os.Geteuid() == 0 {
		t.Skip("NOT CHECKED: the superuser may write everywhere")
	}
	dir := t.TempDir()
	if err := os.Chmod(dir, 0o555); err != nil {
		t.Fatal(err)
	}
	defer os.Chmod(dir, 0o755)
	path := filepath.Join(dir, "a.png")
	if err := WriteFile(path, say("x")); err == nil || err.Error() != path+": permission denied" {
		t.Errorf("got %v", err)
	}
}

// TestWriteFileFull writes to the device that is always full, by its name and through a link.
func TestWriteFileFull(t *testing.T) {
	if _, err := os.Stat("/dev/full"); err != nil {
		t.Skip("NOT CHECKED: this system has no /dev/full")
	}
	dir := t.TempDir()
	link := filepath.Join(dir, "a.png")
	if err := os.Symlink("/dev/full", link); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{"/dev/full", link} {
		for _, n := range []int{1, 1 << 20} {
			err := WriteFile(path, say(strings.Repeat("x", n)))
			if err == nil || err.Error() != path+": no space left on device" {
				t.Errorf("%s, %d bytes: got %v", path, n, err)
			}
		}
	}
	only(t, dir, "a.png")
	if info, err := os.Stat("/dev/full"); err != nil || info.Mode().IsRegular() {
		t.Fatal("the device was replaced by a file")
	}
}

func TestWriteFileFollowsLinks(t *testing.T) {
	dir := t.TempDir()
	target, link := filepath.Join(dir, "target"), filepath.Join(dir, "link")
	if err := os.WriteFile(target, []byte("old"), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(target, link); err != nil {
		t.Skip("NOT CHECKED: no links here: ", err)
	}
	if err := WriteFile(link, say("new")); err != nil {
		t.Fatal(err)
	}
	if contents(t, target) != "new" {
		t.Error("the link's target has its old text")
	}
	only(t, dir, "link", "target")
}
