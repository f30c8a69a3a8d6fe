package main

import (
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
		word = strings.ReplaceAll(word, "_", "-")
		if strings.ReplaceAll(name, "_", "-") == word {
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
