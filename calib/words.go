package calib

import (
	"fmt"
	"strings"
)

func plural(n int) string {
	if n == 1 {
		return ""
	}
	return "s"
}

// Counted is "1 reading" or "3 readings".
func Counted(n int, what string) string { return fmt.Sprintf("%d %s%s", n, what, plural(n)) }

// List names the first few of many.
func List(names []string) string {
	const shown = 8
	if len(names) <= shown {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:shown], ", "), len(names)-shown)
}
