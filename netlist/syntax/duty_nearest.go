package syntax

import "strings"

// Nearest finds the word that a misspelt one most likely means: the smallest number of letters changed,
// missing, added or swapped, upper and lower case aside, at most a third of its length (one for short
// words). ok is false when none is near. The first of equals wins.
func Nearest(word string, words []string) (nearest string, ok bool) {
	w := []rune(strings.ToLower(word))
	if len(w) > 64 {
		return "", false
	}
	best := max(1, len(w)/3) + 1
	for _, candidate := range words {
		c := []rune(strings.ToLower(candidate))
		if len(c) > 64 || len(c)-len(w) >= best || len(w)-len(c) >= best {
			continue
		}
		if d := editDistance(w, c); d < best {
			best, nearest, ok = d, candidate, true
		}
	}
	return nearest, ok
}

// editDistance counts single-letter changes and swaps of neighbours between two words.
func editDistance(a, b []rune) int {
	before, last, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range last {
		last[j] = j
	}
	for i := range a {
		row[0] = i + 1
		for j := range b {
			cost := 1
			if a[i] == b[j] {
				cost = 0
			}
			row[j+1] = min(last[j]+cost, last[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && a[i] == b[j-1] && a[i-1] == b[j] {
				row[j+1] = min(row[j+1], before[j-1]+1)
			}
		}
		before, last, row = last, row, before
	}
	return last[len(b)]
}
