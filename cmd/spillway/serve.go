package main

import (
	"context"
	"errors"
	"fmt"
	"log/slog"
)

type serveCommand struct {
	Data            string `xor:"place" placeholder:"DIR" help:"Folder of the database and the uploaded files; made when absent."`
	Database        string `xor:"place" placeholder:"FILE" help:"Database file; uploaded files stand in a folder beside it."`
	Addr            string `placeholder:"HOST:PORT" help:"Address to serve on (127.0.0.1:8080)."`
	ExposeToNetwork bool   `help:"Serve on an address that other machines can reach. There are no accounts yet: whoever reaches it can read and change everything."`
}

func (c *serveCommand) Run(ctx context.Context, io *streams) (err error) {
	if c.Data == "" && c.Database == "" {
		return usagef("serve: say where the database is: --data DIR or --database FILE")
	}
	log := slog.New(slog.NewTextHandler(io.err, nil))
	listener, err := listen(c.Addr, c.ExposeToNetwork)
	if err != nil {
		return err
	}
	defer listener.Close()
	path := c.Database
	if c.Data != "" {
		path = inFolder(c.Data)
	}
	store, err := openStore(ctx, path)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, store.Close()) }()

	if loopback, _ := isLoopback(listener.Addr().String()); loopback {
		fmt.Fprintf(io.out, "Spillway is at http://%s/ and is served on %s only; Ctrl-C ends it.\n", listener.Addr(), host(listener))
	} else {
		log.Warn("there are no accounts yet: whoever reaches this address can read and change everything", "address", listener.Addr().String())
		fmt.Fprintf(io.out, "Spillway is at http://%s/ and open to the network; Ctrl-C ends it.\n", listener.Addr())
	}
	if err := io.out.Flush(); err != nil {
		return err
	}
	log.Info("serving", "address", listener.Addr().String(), "database", path, "version", version())
	return serveHTTP(ctx, listener, newHandler(store, log), log)
}
