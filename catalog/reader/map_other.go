//go:build !unix

package reader

import "os"

func mapFile(*os.File, int64) (data []byte, release func(), ok bool) { return nil, nil, false }

func forget([]byte) {}
