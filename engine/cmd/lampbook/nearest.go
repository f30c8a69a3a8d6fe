package main

import (
	"fmt"

	"lampbook/lua/bind"
)

// didYouMean returns "; did you mean X?" for the known name nearest to the given one, or nothing where none is near.
func didYouMean(given string, known []string) string {
	if n := bind.Nearest(given, known); n != "" {
		return fmt.Sprintf("; did you mean %s?", n)
	}
	return ""
}
