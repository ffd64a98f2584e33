package studyfile

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// Error is one mistake in one file. Line and Column count from 1; 0 means the whole file, or the whole line.
type Error struct {
	File         string
	Line, Column int
	Text, Hint   string
}

// Error is `file:line:column: text`, with the hint on a line of its own.
func (e *Error) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	if e.Line > 0 {
		fmt.Fprintf(&b, ":%d", e.Line)
		if e.Column > 0 {
			fmt.Fprintf(&b, ":%d", e.Column)
		}
	}
	b.WriteString(": " + e.Text)
	if e.Hint != "" {
		b.WriteString("\n  hint: " + e.Hint)
	}
	return b.String()
}

// Errors are all mistakes of a set of files, sorted by file and line.
type Errors []*Error

func (e Errors) Error() string {
	lines := make([]string, len(e))
	for i := range e {
		lines[i] = e[i].Error()
	}
	return strings.Join(lines, "\n")
}

// faults collects mistakes while files are read. The zero value is empty.
type faults struct{ list Errors }

func (f *faults) add(file string, line, column int, text, hint string) {
	f.list = append(f.list, &Error{file, line, column, text, hint})
}

// err sorts the mistakes and drops repeated ones; nil where there are none.
func (f *faults) err() error {
	if len(f.list) == 0 {
		return nil
	}
	slices.SortStableFunc(f.list, func(a, b *Error) int {
		return cmp.Or(cmp.Compare(a.File, b.File), cmp.Compare(a.Line, b.Line), cmp.Compare(a.Column, b.Column), cmp.Compare(a.Text, b.Text))
	})
	f.list = slices.CompactFunc(f.list, func(a, b *Error) bool { return *a == *b })
	return f.list
}
