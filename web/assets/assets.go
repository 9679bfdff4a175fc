// Package assets serves the program's own files under names that carry their
// digest, so that a browser may keep them for ever.
package assets

import (
	"crypto/sha256"
	"embed"
	"encoding/hex"
	"io/fs"
	"mime"
	"net/http"
	"path"
	"strings"
)

//go:embed spillway.css htmx.min.js mark.svg
var files embed.FS

type asset struct {
	content []byte
	kind    string
}

var (
	byPath = map[string]asset{}
	paths  = map[string]string{}
)

func init() {
	entries, err := fs.ReadDir(files, ".")
	if err != nil {
		panic(err) // the files are part of the program
	}
	for _, e := range entries {
		content, err := files.ReadFile(e.Name())
		if err != nil {
			panic(err)
		}
		digest := sha256.Sum256(content)
		ending := path.Ext(e.Name())
		url := "/assets/" + strings.TrimSuffix(e.Name(), ending) + "." + hex.EncodeToString(digest[:6]) + ending
		byPath[url] = asset{content, mime.TypeByExtension(ending)}
		paths[e.Name()] = url
	}
}

// Path is the address of a file by its plain name. It panics for a name that
// is not embedded: a page would be without its style.
func Path(name string) string {
	url, ok := paths[name]
	if !ok {
		panic("assets: no file " + name)
	}
	return url
}

// Handler serves the files.
func Handler() http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		a, ok := byPath[r.URL.Path]
		if !ok {
			http.NotFound(w, r)
			return
		}
		w.Header().Set("Content-Type", a.kind)
		w.Header().Set("Cache-Control", "public, max-age=31536000, immutable")
		if r.Method != http.MethodHead {
			_, _ = w.Write(a.content) // a client that went away is no error of ours
		}
	})
}
