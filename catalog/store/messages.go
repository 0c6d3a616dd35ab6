package store

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"

	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// messages hands the messages of an Arrow file to the library as views of its
// bytes. The library's own reader of mapped files (arrow-go v18.8.0) fails on
// dictionaries, and its other readers copy; but a file is, between its first
// eight bytes and its footer, a stream of messages, and the library takes those
// from anyone.
type messages struct {
	data []byte // from the next message on
}

var errMessage = errors.New("a message that ends beyond the file")

const (
	magic        = "ARROW1"
	continuation = 0xFFFFFFFF
)

// newMessages checks that the bytes begin and end like an Arrow file.
func newMessages(data []byte) (*messages, error) {
	if len(data) < 24 || !bytes.HasPrefix(data, []byte(magic+"\x00\x00")) || !bytes.HasSuffix(data, []byte(magic)) {
		return nil, errors.New("no Arrow file")
	}
	return &messages{data: data[8:]}, nil
}

// Message is the next message, io.EOF behind the last one.
func (m *messages) Message() (*ipc.Message, error) {
	if len(m.data) < 8 || binary.LittleEndian.Uint32(m.data) != continuation {
		return nil, errMessage
	}
	size := int(int32(binary.LittleEndian.Uint32(m.data[4:])))
	switch {
	case size == 0:
		return nil, io.EOF
	case size < 8 || size%8 != 0 || size > len(m.data)-8:
		return nil, errMessage
	}
	meta := memory.NewBufferBytes(m.data[8 : 8+size])
	rest := m.data[8+size:]
	// The length of the body stands in the metadata, which only a message reads.
	length := ipc.NewMessage(meta, memory.NewBufferBytes(nil)).BodyLen()
	if length < 0 || length > int64(len(rest)) {
		return nil, errMessage
	}
	m.data = rest[length:]
	return ipc.NewMessage(meta, memory.NewBufferBytes(rest[:length:length])), nil
}

// Retain and Release are the library's counting of references; views need none.
func (m *messages) Retain()  {}
func (m *messages) Release() {}
