// Package prompt is the terminal's side of the program: it asks for statements,
// completes them, keeps the history, stops a running statement at Ctrl-C, and
// shows how far long work has come. What statements mean is the engine's.
//
// # Model
//
// Lines are gathered until every statement in them is closed by a semicolon
// (lang.Split); then they run as one text called "input". A lone QUIT, EXIT or
// HELP needs no semicolon. The terminal is in raw mode only while a line is
// edited, so that Ctrl-C during a statement is a signal, which cancels the
// statement's context and nothing else.
//
// Completion asks two things of the place of the cursor. Which words may stand
// there, it asks the parser itself: a word may stand where the parser gets past
// it, and is more than a name where what may follow it differs from what may
// follow any name (words.go). Which names may stand there, it reads off the
// tokens around the cursor (place.go), and takes the names from the engine's
// registries and the catalog. It has no list of its own of either.
//
// The history keeps one line for each statement (history.go): line breaks become
// blanks, comments to the end of the line become bracketed ones, and a line break
// inside a text or a quoted name becomes ␤. Recalled, the line means what the
// statement meant.
//
// # The terminal
//
// The library for editing lines panics, in a goroutine of its own, at a candidate
// that is wider than the terminal (adapter.go cuts them), at Ctrl-T in a line of one
// character, at Ctrl-K while it shows candidates, and at the end of a search of an
// empty history; it never comes back from a terminal as wide as the prompt. It
// suspends its parent at Ctrl-Z, ends at the Delete key on an empty line, and takes
// pasted tabs for a wish to complete. keys.go and the line editor's configuration
// stand between all this and the user, and a test types at random to find more.
// Its Close may block, so it is never called: the terminal's state is kept at the
// start and put back at the end, whatever the end is.
//
// # Limitations
//
// Completion looks at the statement at the cursor only, and only appends. The words
// that it asks the parser for may be of statements that the engine refuses so far.
// A statement that holds the character ␤ itself is not kept in the history. The
// sizes of tables and of the line of progress are those of the terminal when they
// are printed. Without job control, Ctrl-Z waits a second and does nothing.
package prompt
