package storage

import (
	"slices"
	"sync"

	"spillway/severity/claims"
)

// cachedClaims bounds the claims of all cached books together: about 100
// bytes each, with their losses sorted.
const cachedClaims = 12_000_000

// bookCache keeps the books used last. Books never change, since batches
// never do. Two requests for a book that is not there make it once.
type bookCache struct {
	mutex   sync.Mutex
	entries map[string]*bookEntry
	order   []string // the one used last at the end
}

type bookEntry struct {
	once   sync.Once
	book   *claims.Book
	err    error
	claims int // of the book, once made; guarded by the cache's mutex
}

func (c *bookCache) get(key string, makeBook func() (*claims.Book, error)) (*claims.Book, error) {
	c.mutex.Lock()
	e, ok := c.entries[key]
	if !ok {
		if c.entries == nil {
			c.entries = map[string]*bookEntry{}
		}
		e = new(bookEntry)
		c.entries[key] = e
	}
	c.order = append(slices.DeleteFunc(c.order, func(k string) bool { return k == key }), key)
	c.mutex.Unlock()

	e.once.Do(func() { e.book, e.err = makeBook() })

	c.mutex.Lock()
	defer c.mutex.Unlock()
	if e.err != nil {
		// A failure, such as a request given up, is not remembered.
		if c.entries[key] == e {
			c.drop(key)
		}
		return nil, e.err
	}
	e.claims = e.book.Len()
	total := 0
	for i := len(c.order) - 1; i >= 0; i-- {
		if total += c.entries[c.order[i]].claims; total > cachedClaims && c.order[i] != key {
			c.drop(c.order[i])
		}
	}
	return e.book, nil
}

func (c *bookCache) drop(key string) {
	delete(c.entries, key)
	c.order = slices.DeleteFunc(c.order, func(k string) bool { return k == key })
}
