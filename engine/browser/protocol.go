package browser

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"os/exec"
	"sync"
	"time"
)

// patience is how long an answer may take on a machine that has much else to do.
const patience = 60 * time.Second

// message is one of the protocol: a question, its answer, or an event.
type message struct {
	ID      int64           `json:"id,omitempty"`
	Session string          `json:"sessionId,omitempty"`
	Method  string          `json:"method,omitempty"`
	Params  json.RawMessage `json:"params,omitempty"`
	Result  json.RawMessage `json:"result,omitempty"`
	Error   *struct {
		Message string `json:"message"`
	} `json:"error,omitempty"`
}

// wire is the connection to a running Chromium.
type wire struct {
	run  *exec.Cmd
	out  io.WriteCloser // what we ask
	in   io.ReadCloser  // what it says
	gone chan struct{}  // closed when it says no more

	mu      sync.Mutex
	last    int64
	waiting map[int64]chan message
	events  map[string]func(message) // by session
}

// start runs Chromium with its pipes at the descriptors 3 and 4.
func start(program string, args []string) (*wire, error) {
	theirIn, ourOut, err := os.Pipe()
	if err != nil {
		return nil, err
	}
	ourIn, theirOut, err := os.Pipe()
	if err != nil {
		return nil, err
	}
	w := &wire{run: exec.Command(program, args...), out: ourOut, in: ourIn, gone: make(chan struct{}),
		waiting: map[int64]chan message{}, events: map[string]func(message){}}
	w.run.ExtraFiles = []*os.File{theirIn, theirOut}
	err = w.run.Start()
	theirIn.Close()
	theirOut.Close()
	if err != nil {
		return nil, err
	}
	go w.listen()
	return w, nil
}

// listen hands on what Chromium says until it ends.
func (w *wire) listen() {
	defer close(w.gone)
	r := bufio.NewReaderSize(w.in, 1<<16)
	for {
		text, err := r.ReadBytes(0)
		if err != nil {
			return
		}
		var m message
		if json.Unmarshal(text[:len(text)-1], &m) != nil {
			continue
		}
		w.mu.Lock()
		answer, event := w.waiting[m.ID], w.events[m.Session]
		delete(w.waiting, m.ID)
		w.mu.Unlock()
		switch {
		case m.ID != 0 && answer != nil:
			answer <- m
		case m.ID == 0 && event != nil:
			event(m)
		}
	}
}

// ask sends a question and waits for its answer, which is read into result if that is not
// nil.
func (w *wire) ask(session, method string, params, result any) error {
	p, err := json.Marshal(params)
	if err != nil {
		return err
	}
	answer := make(chan message, 1)
	w.mu.Lock()
	w.last++
	text, err := json.Marshal(message{ID: w.last, Session: session, Method: method, Params: p})
	if err == nil {
		w.waiting[w.last] = answer
		_, err = w.out.Write(append(text, 0))
	}
	w.mu.Unlock()
	if err != nil {
		return err
	}
	select {
	case m := <-answer:
		if m.Error != nil {
			return fmt.Errorf("%s: %s", method, m.Error.Message)
		}
		if result == nil {
			return nil
		}
		return json.Unmarshal(m.Result, result)
	case <-w.gone:
		return fmt.Errorf("%s: the browser has ended", method)
	case <-time.After(patience):
		return fmt.Errorf("%s: no answer in %v", method, patience)
	}
}

// stop ends Chromium, kindly first.
func (w *wire) stop() {
	w.mu.Lock()
	w.last++
	text, err := json.Marshal(message{ID: w.last, Method: "Browser.close"})
	if err == nil {
		_, _ = w.out.Write(append(text, 0))
	}
	w.mu.Unlock()
	select {
	case <-w.gone:
	case <-time.After(5 * time.Second):
		_ = w.run.Process.Kill()
	}
	w.out.Close()
	_ = w.run.Wait()
	w.in.Close()
}
