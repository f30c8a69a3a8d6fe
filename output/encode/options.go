package encode

import (
	"fmt"
	"strconv"

	"lampbook/engine/pixmap"
)

// Options tunes an encoder. The zero value suits most pictures.
type Options struct {
	Bits    int         // bits a channel: PNG 8 or 16, EXR 16 (half) or 32 (float); 0 means 8 and 32
	Text    []KeyValue  // what made the picture, in order; no key twice
	Numbers []KeyNumber // likewise; float attributes in EXR, the shortest decimal in PNG; no key twice
}

// KeyValue is a piece of text metadata. Keys are 1 to 31 printable ASCII characters without a space at either end or two in a row,
// which is what PNG and OpenEXR both take; values are UTF-8 without zero bytes.
type KeyValue struct{ Key, Value string }

// KeyNumber is a number in the metadata, with a key as of KeyValue.
type KeyNumber struct {
	Key   string
	Value float32
}

// maxKey is the longest attribute name of an OpenEXR file without the long-names flag; PNG takes 79.
const maxKey = 31

// check reports metadata that a file could not hold.
func (o Options) check() error {
	seen := map[string]bool{}
	key := func(k string) error {
		if !validKey(k) {
			return fmt.Errorf("metadata key %q: 1 to %d printable ASCII characters are accepted, without spaces at the ends or two in a row", k, maxKey)
		}
		if seen[k] {
			return fmt.Errorf("metadata key %q was given twice", k)
		}
		seen[k] = true
		return nil
	}
	for _, kv := range o.Text {
		if err := key(kv.Key); err != nil {
			return err
		}
		for _, r := range kv.Value {
			if r == 0 {
				return fmt.Errorf("metadata %q: the text has a zero byte", kv.Key)
			}
		}
	}
	for _, kn := range o.Numbers {
		if err := key(kn.Key); err != nil {
			return err
		}
	}
	return nil
}

func validKey(k string) bool {
	if k == "" || len(k) > maxKey {
		return false
	}
	for i := range len(k) {
		if k[i] < ' ' || k[i] > '~' {
			return false
		}
		if k[i] == ' ' && (i == 0 || i == len(k)-1 || k[i-1] == ' ') {
			return false
		}
	}
	return true
}

// decimal is the shortest text that reads back as the same float32.
func decimal(v float32) string { return strconv.FormatFloat(float64(v), 'g', -1, 32) }

// checkSize reports an image that is empty, too large for any of the formats, or whose planes have the wrong length.
func checkSize(img *pixmap.Image) error {
	const most = 1 << 20
	if img.Width < 1 || img.Height < 1 || img.Width > most || img.Height > most {
		return fmt.Errorf("image of %d × %d: 1 to %d pixels a side are accepted", img.Width, img.Height, most)
	}
	for _, p := range img.Planes {
		if len(p.Pix) != img.Width*img.Height {
			return fmt.Errorf("plane %q has %d values, %d × %d needs %d", p.Name, len(p.Pix), img.Width, img.Height, img.Width*img.Height)
		}
	}
	return nil
}
