// Package timeform reads times that are written by a pattern, such as
// DD.MM.YYYY hh:mm:ss, in the local time of a place, and brings them to UTC.
//
// # Patterns
//
//	YYYY YY    the year; two digits are 1970 to 2069
//	MM M MMM   the month: two digits; one or two; Jan to Dec in any case
//	DD D       the day: two digits; one or two
//	hh h       the hour, 0 to 23, or 1 to 12 where the pattern has AM
//	mm m ss s  minutes and seconds
//	f ff fff … a fraction of a second, of one digit or more, however many f's
//	AM or PM   either of AM and PM, in any case
//	T Z "…"    these letters; the text between the quotation marks
//
// A blank stands for one blank or more, any other character that is neither a
// letter nor a digit for itself. A pattern has year, month and day; without an hour
// it means midnight. There is no 24:00 and no 60th second.
//
// # Zones
//
// A zone is a name of the IANA time zone database (Europe/Zurich), UTC, or an
// offset that never changes (+01:00, UTC+1), for instruments that do not follow the
// clock change. Local times that the change to summer time skips are no times.
// Those that come twice when it ends are ambiguous: Settle decides them by the
// order of the rows, or leaves them undecided, and never guesses.
//
// # What is exact
//
// All of it is in whole microseconds. Further digits of a fraction must be zeros.
//
// # Limitations
//
// Month names are English. The rules of a zone are those of the machine's copy of
// the database, or of the one built into the program where the machine has none;
// for years ahead they are today's rules. No leap seconds.
package timeform
