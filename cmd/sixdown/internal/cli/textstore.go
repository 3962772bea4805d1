package cli

import "sync"

// A textStore keeps texts that are asked for over and over. Several goroutines may use it.
type textStore struct {
	mu    sync.Mutex
	texts map[string]string
}

func newTextStore() *textStore { return &textStore{texts: map[string]string{}} }

// get returns the text of that name, made once.
func (t *textStore) get(name string, read func() (string, error)) (string, error) {
	t.mu.Lock()
	defer t.mu.Unlock()
	if text, ok := t.texts[name]; ok {
		return text, nil
	}
	text, err := read()
	if err == nil {
		t.texts[name] = text
	}
	return text, err
}
