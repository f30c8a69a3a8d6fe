package mesh

import (
	"bytes"
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io/fs"
	"path"
	"slices"
	"strings"

	"lampbook/engine/model"
)

// file reads a mesh file by its extension. Where m.FileHash is given, the content must still have it.
func file(m model.Mesh, read Reader) (*Mesh, error) {
	if read == nil {
		return nil, fmt.Errorf("no reader given for %s", m.File)
	}
	if !(m.Unit > 0 && m.Unit <= maxCoordinate) {
		return nil, fmt.Errorf("unit must be > 0 and at most %v metres, got %v", maxCoordinate, m.Unit)
	}
	if err := angle("smooth", m.Smooth); err != nil {
		return nil, err
	}
	data, err := readMain(m.File, read)
	if err != nil {
		return nil, err
	}
	if m.FileHash != "" {
		sum, err := hashOBJ(m.File, data, read)
		if err != nil {
			return nil, err
		}
		if sum != m.FileHash {
			return nil, &PosError{m.File, 0, fmt.Errorf("the file, or one that it names, has changed since the scene was read")}
		}
	}
	return readOBJ(data, m, read)
}

// readMain checks the extension of a mesh file and reads it.
func readMain(name string, read Reader) ([]byte, error) {
	if ext := strings.ToLower(path.Ext(name)); ext != ".obj" {
		return nil, &PosError{name, 0, fmt.Errorf("mesh files of type %q are not read: .obj is accepted", ext)}
	}
	data, err := read(name)
	if err != nil {
		return nil, &PosError{name, 0, err}
	}
	return data, nil
}

// HashFile returns what model.Mesh.FileHash holds: a SHA-256 over the length and content of the mesh file, then over those of each
// material library that it names, in that order, in hexadecimal. It does not look at the geometry.
func HashFile(name string, read Reader) (string, error) {
	data, err := readMain(name, read)
	if err != nil {
		return "", err
	}
	return hashOBJ(name, data, read)
}

func hashOBJ(name string, data []byte, read Reader) (string, error) {
	lines, err := newLineReader(name, data)
	if err != nil {
		return "", err
	}
	sum := sha256.New()
	addToHash(sum, data)
	libraries := newLibraries(name, read)
	for {
		keyword, rest, ok := lines.next()
		if !ok {
			return hex.EncodeToString(sum.Sum(nil)), nil
		}
		if string(keyword) != "mtllib" {
			continue
		}
		found, err := libraries.find(rest)
		if err != nil {
			return "", &PosError{name, lines.line, err}
		}
		for _, l := range found {
			addToHash(sum, l.data)
		}
	}
}

func addToHash(sum hash.Hash, data []byte) {
	var length [8]byte
	binary.LittleEndian.PutUint64(length[:], uint64(len(data)))
	sum.Write(length[:])
	sum.Write(data)
}

// maxNames is the length of the longest mtllib statement, in bytes.
const maxNames = 4096

// libraries finds the material libraries of an OBJ file, each once.
type libraries struct {
	folder string
	read   Reader
	seen   map[string]bool
	absent []string // names, as the file gives them, that lead nowhere
}

// library is a material library as it was read.
type library struct {
	path string
	data []byte
}

func newLibraries(objName string, read Reader) *libraries {
	return &libraries{folder: path.Dir(objName), read: read, seen: map[string]bool{}}
}

// find returns the libraries that a mtllib statement names and that have not been found before. The statement is one name,
// which may have blanks in it; where there is no such file, it is several names that end in ".mtl". A backslash divides folders
// as a slash does. A library that is not there is noted in absent: the form does not need it.
func (l *libraries) find(names []byte) ([]library, error) {
	whole := strings.ReplaceAll(string(bytes.TrimSpace(names)), `\`, "/")
	if whole == "" {
		return nil, fmt.Errorf("mtllib: a file name is missing")
	}
	if len(whole) > maxNames {
		return nil, fmt.Errorf("mtllib: %d bytes of names, at most %d are accepted", len(whole), maxNames)
	}
	one, err := l.one(whole)
	if err == nil {
		return one, nil
	}
	several := splitNames(whole)
	if len(several) < 2 {
		return nil, l.without(whole, err)
	}
	var all []library
	for _, name := range several {
		one, err := l.one(name)
		if err != nil {
			if err := l.without(name, err); err != nil {
				return nil, err
			}
			continue
		}
		all = append(all, one...)
	}
	return all, nil
}

// without notes a library that is not there; any other mistake in reading it stays one.
func (l *libraries) without(name string, err error) error {
	if !errors.Is(err, fs.ErrNotExist) {
		return fmt.Errorf("mtllib %s: %w", quote([]byte(name)), err)
	}
	if !slices.Contains(l.absent, name) {
		l.absent = append(l.absent, name)
	}
	return nil
}

// one reads a library, unless it has been read before.
func (l *libraries) one(name string) ([]library, error) {
	at := path.Clean(name)
	if !path.IsAbs(at) {
		at = path.Join(l.folder, at)
	}
	if l.seen[at] {
		return nil, nil
	}
	data, err := l.read(at)
	if err != nil {
		return nil, err
	}
	l.seen[at] = true
	return []library{{at, data}}, nil
}

// splitNames cuts behind every word that ends in ".mtl".
func splitNames(names string) []string {
	var out []string
	var open []string
	for _, word := range strings.Fields(names) {
		open = append(open, word)
		if n := len(word); n >= 4 && strings.EqualFold(word[n-4:], ".mtl") {
			out, open = append(out, strings.Join(open, " ")), nil
		}
	}
	if open != nil {
		out = append(out, strings.Join(open, " "))
	}
	return out
}
