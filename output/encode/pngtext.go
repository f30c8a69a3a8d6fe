package encode

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
)

// Limits of PNGText: a picture's metadata is small, and a broken file must not eat the machine.
const (
	maxTextChunk = 4 << 20
	maxTexts     = 1000
)

// PNGText reads the uncompressed iTXt texts that stand before a PNG's pixels, in order: what PNG and PNGImage write.
func PNGText(r io.Reader) ([]KeyValue, error) {
	var signature [8]byte
	if _, err := io.ReadFull(r, signature[:]); err != nil || string(signature[:]) != "\x89PNG\r\n\x1a\n" {
		return nil, errors.New("png: no PNG signature")
	}
	var texts []KeyValue
	for {
		var head [8]byte
		if _, err := io.ReadFull(r, head[:]); err != nil {
			return nil, errors.New("png: the file ends before its pixels")
		}
		length, name := binary.BigEndian.Uint32(head[:4]), string(head[4:])
		if name == "IDAT" || name == "IEND" {
			return texts, nil
		}
		if length > maxTextChunk {
			return nil, fmt.Errorf("png: chunk %q of %d bytes before the pixels, at most %d are accepted", name, length, maxTextChunk)
		}
		data, err := io.ReadAll(io.LimitReader(r, int64(length)+4))
		if err != nil || len(data) != int(length)+4 {
			return nil, errors.New("png: the file ends inside a chunk")
		}
		sum := crc32.Update(crc32.ChecksumIEEE(head[4:]), crc32.IEEETable, data[:length])
		if sum != binary.BigEndian.Uint32(data[length:]) {
			return nil, fmt.Errorf("png: chunk %q has a wrong checksum", name)
		}
		if name != "iTXt" {
			continue
		}
		if kv, ok := parseText(data[:length]); ok {
			texts = append(texts, kv)
		}
		if len(texts) > maxTexts {
			return nil, fmt.Errorf("png: more than %d texts", maxTexts)
		}
	}
}

// parseText reads the body of an iTXt chunk; ok is false where it is compressed or broken.
func parseText(data []byte) (kv KeyValue, ok bool) {
	key, rest, ok := bytes.Cut(data, []byte{0})
	if !ok || len(rest) < 2 || rest[0] != 0 {
		return KeyValue{}, false
	}
	_, rest, ok = bytes.Cut(rest[2:], []byte{0}) // language
	if !ok {
		return KeyValue{}, false
	}
	_, text, ok := bytes.Cut(rest, []byte{0}) // translated keyword
	return KeyValue{string(key), string(text)}, ok
}
