package readers

import "fmt"

// Error is a refusal: the file, or what was asked of it, can't be read as it is.
// Msg is one lower-case sentence without a full stop that says what was found and
// what would do; Err may hold the cause.
type Error struct {
	Pos Pos
	Msg string
	Err error
}

// Error gives the position, a colon and the sentence.
func (e *Error) Error() string {
	where := e.Pos.String()
	if where == "" {
		return e.Msg
	}
	return where + ": " + e.Msg
}

// Unwrap gives the cause, nil when there is none.
func (e *Error) Unwrap() error { return e.Err }

// refuse makes an *Error at a position.
func refuse(pos Pos, format string, args ...any) *Error {
	return &Error{Pos: pos, Msg: fmt.Sprintf(format, args...)}
}
