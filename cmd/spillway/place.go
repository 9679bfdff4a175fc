package main

import (
	"context"
	"errors"
	"fmt"
	"net"
	"path/filepath"
	"syscall"
	"time"

	"spillway/storage"
)

// databaseName is the database's file in a data folder.
const databaseName = "spillway.db"

// openStore opens the database, with the wall clock for what it records.
func openStore(ctx context.Context, path string) (*storage.Store, error) {
	if !haveCgo {
		return nil, errors.New("this program was built without cgo, which its database needs: build it with CGO_ENABLED=1 and a C compiler")
	}
	return storage.Open(ctx, path, time.Now)
}

// inFolder is the path of the database of a data folder.
func inFolder(folder string) string { return filepath.Join(folder, databaseName) }

// listen opens the address. An address that others could reach needs the
// user's word for it. Where the usual port is taken and no address was asked
// for, any free port will do.
func listen(addr string, exposed bool) (net.Listener, error) {
	asked := addr != ""
	if !asked {
		addr = usualAddress
	}
	loopback, err := isLoopback(addr)
	if err != nil {
		return nil, usage{err}
	}
	if !loopback && !exposed {
		return nil, usagef("--addr %s can be reached from other machines, and there are no accounts yet: choose a loopback address such as %s, or add --expose-to-network to serve", addr, usualAddress)
	}
	listener, err := net.Listen("tcp", addr)
	if !asked && errors.Is(err, syscall.EADDRINUSE) {
		listener, err = net.Listen("tcp", "127.0.0.1:0")
	}
	if err != nil {
		return nil, fmt.Errorf("listen on %s: %w", addr, err)
	}
	return listener, nil
}

// host is the address without its port.
func host(listener net.Listener) string {
	name, _, err := net.SplitHostPort(listener.Addr().String())
	if err != nil {
		return listener.Addr().String()
	}
	return name
}

const usualAddress = "127.0.0.1:8080"
