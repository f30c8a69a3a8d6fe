//go:build linux || darwin

package encode

import (
	"net"
	"os"
	"path/filepath"
	"syscall"
	"testing"
)

// TestWriteFileSpecial: what is neither an ordinary file nor a device is left alone, and nobody is waited for.
func TestWriteFileSpecial(t *testing.T) {
	dir := t.TempDir()
	pipe, link, socket := filepath.Join(dir, "pipe"), filepath.Join(dir, "link"), filepath.Join(dir, "socket")
	if err := syscall.Mkfifo(pipe, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(pipe, link); err != nil {
		t.Fatal(err)
	}
	l, err := net.Listen("unix", socket)
	if err != nil {
		t.Fatal(err)
	}
	defer l.Close()
	for _, c := range []struct{ path, want string }{
		{pipe, pipe + ": is a pipe, not a file"},
		{link, link + ": is a pipe, not a file"},
		{socket, socket + ": is no ordinary file"},
	} {
		if err := WriteFile(c.path, say("x")); err == nil || err.Error() != c.want {
			t.Errorf("got %v, want %s", err, c.want)
		}
	}
	only(t, dir, "link", "pipe", "socket")
}
