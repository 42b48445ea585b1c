package fault

import "strings"

// Nearest is the known word that a mistyped one was most likely meant to be,
// or "" where none is near: the smallest number of letters to change, insert,
// drop or swap (the distance of Damerau 1964, restricted form), at most a third
// of the word and one more, and never all of it.
func Nearest(word string, known []string) string {
	letters := len([]rune(word))
	best, bestDistance := "", min(letters/3+2, letters)
	for _, k := range known {
		if d := distance(strings.ToLower(word), strings.ToLower(k)); d < bestDistance {
			best, bestDistance = k, d
		}
	}
	return best
}

func distance(s, t string) int {
	a, b := []rune(s), []rune(t)
	var before []int
	prev, row := make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range prev {
		prev[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			row[j] = min(prev[j]+1, row[j-1]+1, prev[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, prev, row = prev, row, make([]int, len(b)+1)
	}
	return prev[len(b)]
}
