// Package store keeps tables in a folder, so that they are either there whole
// or not there at all.
//
// # Model
//
// The folder holds
//
//	manifest.json   what is there: a list of records, each with a key, the
//	                caller's description, and the file of its table if it has one
//	columns/*.arrow the tables, one file each, in the Arrow IPC file format; or arrays
//	                of several lengths, as lists in one row
//	lock            held while the manifest is changed
//
// Files are never changed. A change writes new files aside, flushes them, gives
// them their names, and then does the same with a new manifest; the moment the
// new manifest takes the old one's name is the moment of the change. Whatever
// interrupts it leaves the folder as it was before or as it is after, and at most
// files that no manifest names; the next change removes those.
//
// Changes hold the lock and read the manifest anew under it, so that two programs
// may change one folder. Readers need no lock: they take the manifest as it is,
// and map the files that it names. A file that was removed meanwhile stays good
// for those who have mapped it.
//
// # Arrow
//
// Each file holds one record batch, so that every column is one run of memory
// that a column.Vector can be a view of: INTEGER is int64, REAL double, TEXT a
// dictionary of UTF-8 with 32-bit indices (signed ones, since not every library
// turns unsigned ones into its own tables), BOOLEAN bool, TIMESTAMP
// timestamp[us, UTC], INTERVAL duration[us], POINT fixed_size_list[3] of double.
// Units and meanings stand in the metadata of the fields as "unit" and "meaning".
// Any Arrow library opens the files.
//
// # Damage
//
// The manifest holds the length and the 64-bit xxHash of each file and a hash of
// itself. Files are checked when they are first opened. A damaged or missing file
// is an error that names it, and is never used; the other tables stay readable,
// and a record whose file is damaged can still be replaced or deleted. A folder whose
// manifest is damaged can be renewed by callers who can make again what it held.
//
// # Limitations
//
// The checksums find accidents, not forgery. On systems without mmap files are
// read into memory. A program that truncates a mapped file in place takes this
// one down with it; nothing here does that. Tables must not be used after Close.
package store
