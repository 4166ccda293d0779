// Package syntax turns the text of netlists and duty sheets into syntax trees and back.
// It does no arithmetic and gives nothing a meaning.
package syntax

import "fmt"

// Position is a place in a file. Line and Column count from 1; columns count characters.
type Position struct {
	File         string
	Line, Column int
}

// String formats the position as file:line:col.
func (p Position) String() string { return fmt.Sprintf("%s:%d:%d", p.File, p.Line, p.Column) }

// Diagnostic says what is wrong with the input and what was expected instead.
// It is an error: a file with a diagnostic is not checked.
type Diagnostic struct {
	At       Position
	What     string // what is wrong
	Expected string // what was expected; may be empty
}

// Error formats the diagnostic as `file:line:col: what, expected ...`.
func (d Diagnostic) Error() string {
	if d.Expected == "" {
		return d.At.String() + ": " + d.What
	}
	return d.At.String() + ": " + d.What + "; expected " + d.Expected
}
