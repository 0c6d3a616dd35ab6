package store

import "golang.org/x/sys/unix"

// populate brings a whole file in at once: all of it is read for its checksum anyway.
const populate = unix.MAP_POPULATE
