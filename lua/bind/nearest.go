package bind

import (
	"fmt"
	"slices"
	"strings"
)

// Nearest returns the known name that a mistyped one is likeliest to mean, the first of equals, or "" where none is near: about a
// third of its letters may be wrong, but no more than one of up to five, as short words are too near to one another.
func Nearest(name string, known []string) string {
	letters := len([]rune(name))
	best, most := "", (letters+1)/3
	if letters <= 5 {
		most = min(most, 1)
	}
	for _, k := range known {
		if d := distance(strings.ToLower(name), strings.ToLower(k), most); d < most || (d == most && best == "") {
			best, most = k, d
		}
	}
	return best
}

// distance is the number of letters to insert, delete, replace or swap with their neighbour on the way from a to b (optimal
// string alignment: Damerau 1964 without overlapping edits). Above most it gives most + 1.
func distance(a, b string, most int) int {
	from, to := []rune(a), []rune(b)
	if len(from)-len(to) > most || len(to)-len(from) > most {
		return most + 1
	}
	var before []int
	last := make([]int, len(to)+1)
	for j := range last {
		last[j] = j
	}
	for i, r := range from {
		row := make([]int, len(to)+1)
		row[0] = i + 1
		for j, s := range to {
			cost := 1
			if r == s {
				cost = 0
			}
			row[j+1] = min(last[j]+cost, last[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && r == to[j-1] && from[i-1] == s {
				row[j+1] = min(row[j+1], before[j-1]+1)
			}
		}
		before, last = last, row
	}
	return min(last[len(to)], most+1)
}

// Guess is the nearest known name as messages give it, or "" where none is near.
func Guess(name string, known []string) string {
	if n := Nearest(name, known); n != "" {
		return fmt.Sprintf("; did you mean %q?", n)
	}
	return ""
}

// Hint is the end of a message about an unknown name: the nearest known one, and all that are accepted where they are few.
func Hint(name string, known []string) string {
	if len(known) == 0 {
		return ""
	}
	hint := Guess(name, known)
	if hint == "" {
		hint = ";"
	}
	const few = 40
	if len(known) > few {
		return fmt.Sprintf("%s accepted: one of %d names", hint, len(known))
	}
	return hint + " accepted: " + strings.Join(known, ", ")
}

// sorted returns the names in the order of the alphabet.
func sorted(names []string) []string {
	names = slices.Clone(names)
	slices.Sort(names)
	return names
}
