package main

import (
	"log/slog"
	"net/http"

	"spillway/storage"
	"spillway/web"
)

// newHandler is the program's pages on one database.
func newHandler(store *storage.Store, log *slog.Logger) http.Handler {
	return web.New(store, log, version())
}
