package main

import (
	"context"
	"errors"
	"fmt"
	"log/slog"
	"net"
	"net/http"
	"time"
)

// stopWait is how long requests under way may still take once the program is
// told to stop.
const stopWait = 15 * time.Second

// isLoopback tells whether an address can be reached from this machine only.
func isLoopback(addr string) (bool, error) {
	host, _, err := net.SplitHostPort(addr)
	if err != nil {
		return false, fmt.Errorf("--addr %q: want host:port, such as 127.0.0.1:8080", addr)
	}
	if host == "localhost" {
		return true, nil
	}
	ip := net.ParseIP(host)
	return ip != nil && ip.IsLoopback(), nil
}

// serveHTTP answers requests until the context ends, then lets those under way
// finish.
func serveHTTP(ctx context.Context, listener net.Listener, handler http.Handler, log *slog.Logger) error {
	server := &http.Server{
		Handler:           handler,
		ReadHeaderTimeout: 10 * time.Second,
		ReadTimeout:       10 * time.Minute, // a large extract over a slow line
		WriteTimeout:      10 * time.Minute,
		IdleTimeout:       2 * time.Minute,
		MaxHeaderBytes:    64 << 10,
		ErrorLog:          slog.NewLogLogger(log.Handler(), slog.LevelWarn),
	}
	failed := make(chan error, 1)
	go func() { failed <- server.Serve(listener) }()
	select {
	case err := <-failed:
		return fmt.Errorf("serve on %s: %w", listener.Addr(), err)
	case <-ctx.Done():
	}
	log.Info("stopping", "wait", stopWait)
	limited, cancel := context.WithTimeout(context.Background(), stopWait)
	defer cancel()
	if err := server.Shutdown(limited); err != nil {
		return errors.Join(fmt.Errorf("requests were cut off: %w", err), server.Close())
	}
	return nil
}
