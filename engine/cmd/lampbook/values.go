package main

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"lampbook/engine/model"
	"lampbook/lua/bind"
)

// wholeNumber is an option's value: a whole number in a range.
type wholeNumber struct {
	to          *int
	least, most int
}

func (v wholeNumber) Set(text string) error {
	n, err := strconv.Atoi(text)
	if err != nil || n < v.least || n > v.most {
		return fmt.Errorf("a whole number from %d to %d is accepted, got %q", v.least, v.most, text)
	}
	*v.to = n
	return nil
}

func (v wholeNumber) Type() string { return "N" }

func (v wholeNumber) String() string { return "" }

// pictureSize is an option's value: width and height in pixels.
type pictureSize struct{ to *[2]int }

func (v pictureSize) Set(text string) error {
	w, h, ok := strings.Cut(strings.ToLower(text), "x")
	width, errW := strconv.Atoi(w)
	height, errH := strconv.Atoi(h)
	if !ok || errW != nil || errH != nil || min(width, height) < 1 || max(width, height) > model.MaxSide {
		return fmt.Errorf("a size such as 480x360 is accepted, 1 to %d pixels a side, got %q", model.MaxSide, text)
	}
	*v.to = [2]int{width, height}
	return nil
}

func (v pictureSize) Type() string { return "WxH" }

func (v pictureSize) String() string { return "" }

// folderPath is an option's value: where a folder is or is to be.
type folderPath struct{ to *string }

func (v folderPath) Set(text string) error {
	if text == "" {
		return errNoFolder
	}
	*v.to = text
	return nil
}

func (v folderPath) Type() string { return "DIR" }

func (v folderPath) String() string { return "" }

// folderPaths is the value of an option that may be repeated: folders.
type folderPaths struct{ to *[]string }

func (v folderPaths) Set(text string) error {
	if text == "" {
		return errNoFolder
	}
	*v.to = append(*v.to, text)
	return nil
}

func (v folderPaths) Type() string { return "DIR" }

func (v folderPaths) String() string { return "" }

// errNoFolder is the mistake of an empty path.
var errNoFolder = errors.New(`the path of a folder is accepted, such as ., got ""`)

// byteSize is an option's value: a number of bytes, in units of a thousand or of 1024.
type byteSize struct{ to *int64 }

// leastMemory holds a picture of the default size; mostMemory is beyond any machine.
const leastMemory, mostMemory = 16 << 20, 1 << 50

// byteUnits are the endings of a byteSize.
var byteUnits = []struct {
	name  string
	bytes float64
}{{"KiB", 1 << 10}, {"MiB", 1 << 20}, {"GiB", 1 << 30}, {"TiB", 1 << 40}, {"KB", 1e3}, {"MB", 1e6}, {"GB", 1e9}, {"TB", 1e12}}

func (v byteSize) Set(text string) error {
	for _, unit := range byteUnits {
		if len(text) <= len(unit.name) || !strings.EqualFold(text[len(text)-len(unit.name):], unit.name) {
			continue
		}
		n, err := strconv.ParseFloat(strings.TrimSpace(text[:len(text)-len(unit.name)]), 64)
		if bytes := n * unit.bytes; err == nil && bytes >= leastMemory && bytes <= mostMemory {
			*v.to = int64(bytes)
			return nil
		}
	}
	return fmt.Errorf("a size such as 800MB or 4GiB is accepted, 16MiB at least, got %q", text)
}

func (v byteSize) Type() string { return "SIZE" }

func (v byteSize) String() string { return "" }

// formatList is an option's value: picture formats with commas between.
type formatList struct{ to *[]model.Format }

func (v formatList) Set(text string) error {
	var formats []model.Format
	for _, name := range strings.Split(text, ",") {
		f, err := formatOf(strings.TrimSpace(name))
		if err != nil {
			return err
		}
		for _, other := range formats {
			if fileEnding(f) == fileEnding(other) {
				return fmt.Errorf("%q names two formats that would be written to one file (%s): choose one", text, fileEnding(f))
			}
		}
		formats = append(formats, f)
	}
	*v.to = formats
	return nil
}

func (v formatList) Type() string { return "LIST" }

func (v formatList) String() string { return "" }

// formatOf returns the format of a name: the scene language's, or the same with '-' for '_'.
func formatOf(name string) (model.Format, error) {
	var known []string
	for f, word := range bind.FormatNames() {
		if strings.ReplaceAll(name, "-", "_") == word {
			return model.Format(f), nil
		}
		known = append(known, word)
	}
	return 0, fmt.Errorf("unknown format %q%s; known are %s", name, didYouMean(name, known), strings.Join(known, ", "))
}

// assignment is NAME=VALUE, as given.
type assignment struct{ name, value string }

// assignmentList is an option's value: NAME=VALUE, once for each time that the option is given.
type assignmentList struct {
	to   *[]assignment
	what string // what the two sides are, as the help shows them
}

func (v assignmentList) Set(text string) error {
	name, value, ok := strings.Cut(text, "=")
	if !ok || name == "" {
		return fmt.Errorf("%s is accepted, got %q", v.what, text)
	}
	*v.to = append(*v.to, assignment{name, value})
	return nil
}

func (v assignmentList) Type() string { return v.what }

func (v assignmentList) String() string { return "" }
