package web

import (
	"bytes"
	"container/list"
	"net/http"
	"sync"
)

// pageCache keeps rendered pages of revisions. A revision never changes; what
// else its page shows is in the key, so that an entry is never out of date.
type pageCache struct {
	mutex   sync.Mutex
	entries map[string]*list.Element
	order   list.List // the page used last in front
	size    int
}

type cachedPage struct {
	key  string
	page []byte
}

// cachedBytes bounds the pages kept, all together.
const cachedBytes = 64 << 20

func (c *pageCache) get(key string) ([]byte, bool) {
	c.mutex.Lock()
	defer c.mutex.Unlock()
	e, ok := c.entries[key]
	if !ok {
		return nil, false
	}
	c.order.MoveToFront(e)
	return e.Value.(*cachedPage).page, true
}

func (c *pageCache) put(key string, page []byte) {
	c.mutex.Lock()
	defer c.mutex.Unlock()
	if c.entries == nil {
		c.entries = map[string]*list.Element{}
	}
	if _, ok := c.entries[key]; ok || len(page) > cachedBytes/8 {
		return
	}
	c.entries[key] = c.order.PushFront(&cachedPage{key, page})
	for c.size += len(page); c.size > cachedBytes; {
		last := c.order.Back()
		old := c.order.Remove(last).(*cachedPage)
		delete(c.entries, old.key)
		c.size -= len(old.page)
	}
}

// cached answers with the page kept under key, or makes and keeps it.
func (s *server) cached(w http.ResponseWriter, r *http.Request, key string, makePage func() (*bytes.Buffer, error)) error {
	page, ok := s.kept.get(key)
	if !ok {
		made, err := makePage()
		if err != nil {
			return err
		}
		page = made.Bytes()
		s.kept.put(key, page)
	}
	if r.URL.Query().Get("done") == "same" {
		w.Header().Set("HX-Push-Url", "false") // the page is where it was: no step for the back button
	}
	w.Header().Set("Content-Type", "text/html; charset=utf-8")
	w.Header().Set("Cache-Control", "no-store") // claims are not for shared caches
	_, _ = w.Write(page)                        // a client that went away is no error of ours
	return nil
}
