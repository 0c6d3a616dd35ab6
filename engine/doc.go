// Package engine runs statements: it binds names, plans, executes, prints and
// saves. One Session is one user at one catalog.
//
// # Model
//
// A script is split into statements and parsed before any of it runs, so that a
// slip in the last line does not leave half a campaign behind. Each statement
// then is bound against what the catalog holds at that moment, and everything it
// has to say beside its result (what was left out, merged, unbounded, assumed)
// is collected, sorted and printed below the result.
//
// Results go to Options.Out; confirmations, notes and errors to Options.Err.
// Result bytes are the same for any number of threads and any order of a
// campaign's rows.
//
// # Limitations
//
// What the language has and the engine has not is refused by name, never
// misread: HELP STATEMENTS and its like mark it.
package engine
