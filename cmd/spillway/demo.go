package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"log/slog"
	"os"

	"spillway/severity/claims"
	"spillway/severity/study"
	"spillway/storage"
	"spillway/storage/extract"
	"spillway/storage/extract/invented"
)

// demoSeed is the seed of the demonstration's book: everybody sees the same.
const demoSeed = 1

type demoCommand struct {
	Data string `placeholder:"DIR" help:"Folder to keep the demonstration in; without it, a temporary one that is removed at the end."`
	Addr string `placeholder:"127.0.0.1:PORT" help:"Loopback address to serve on (127.0.0.1:8080, or any free port when that is taken)."`
}

func (c *demoCommand) Run(ctx context.Context, io *streams) (err error) {
	listener, err := listen(c.Addr, false)
	if err != nil {
		return err
	}
	defer listener.Close()
	folder := c.Data
	if folder == "" {
		if folder, err = os.MkdirTemp("", "spillway-demo-"); err != nil {
			return fmt.Errorf("temporary folder: %w", err)
		}
		defer func() { err = errors.Join(err, os.RemoveAll(folder)) }()
	}
	store, err := openStore(ctx, inFolder(folder))
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, store.Close()) }()
	if err := furnish(ctx, io, store); err != nil {
		return fmt.Errorf("demonstration in %s: %w", folder, err)
	}
	fmt.Fprintf(io.out, "Spillway's demonstration is at http://%s/ and is served on %s only; Ctrl-C ends it.\n", listener.Addr(), host(listener))
	if err := io.out.Flush(); err != nil {
		return err
	}
	log := slog.New(slog.NewTextHandler(io.err, &slog.HandlerOptions{Level: slog.LevelWarn}))
	return serveHTTP(ctx, listener, newHandler(store, log), log)
}

// furnish brings the invented book and a finished study into the database,
// each part only where it is not there yet.
func furnish(ctx context.Context, io *streams, store *storage.Store) error {
	held, err := store.Batches(ctx)
	if err != nil {
		return err
	}
	own := false
	for _, b := range held {
		own = own || b.Source == invented.Source
	}
	if len(held) > 0 && !own {
		return errors.New("there are other claims in this folder; name another for the demonstration")
	}
	var batches []study.BatchRef
	for _, f := range invented.Book(demoSeed) {
		ref, err := load(ctx, io, store, f)
		if err != nil {
			return fmt.Errorf("%s: %w", f.Name, err)
		}
		batches = append(batches, ref)
	}
	return present(ctx, io, store, batches)
}

// load takes a file the way of every upload: stored, guessed, checked,
// accepted.
func load(ctx context.Context, io *streams, store *storage.Store, f invented.File) (study.BatchRef, error) {
	upload, err := store.CreateUpload(ctx, f.Name, f.Source, bytes.NewReader(f.Content), int64(len(f.Content)))
	var held *storage.DuplicateBatch
	if errors.As(err, &held) {
		return batchRef(ctx, store, held.Existing)
	}
	if err != nil {
		return study.BatchRef{}, err
	}
	guess, err := extract.Sniff(bytes.NewReader(f.Content), int64(len(f.Content)), f.Name)
	if err != nil {
		return study.BatchRef{}, err
	}
	if err := store.SavePlan(ctx, upload.ID, extract.Plan{Format: guess.Format, Columns: guess.Columns, Basis: f.Basis}); err != nil {
		return study.BatchRef{}, err
	}
	report, err := store.Check(ctx, upload.ID)
	if err != nil {
		return study.BatchRef{}, err
	}
	year, month, _ := f.Valuation.Civil()
	id, err := store.Accept(ctx, upload.ID, fmt.Sprintf("Claims at the end of quarter %d of %d", month/3, year), nil)
	if err != nil {
		return study.BatchRef{}, err
	}
	fmt.Fprintf(io.err, "%s: %d rows read, %d accepted, %d rejected\n", f.Name, report.Read, report.Accepted, report.Rejected)
	return batchRef(ctx, store, id)
}

func batchRef(ctx context.Context, store *storage.Store, id storage.BatchID) (study.BatchRef, error) {
	batch, err := store.Batch(ctx, id)
	if err != nil {
		return study.BatchRef{}, err
	}
	return study.BatchRef{ID: int64(id), Name: batch.Name, Digest: batch.SHA256}, nil
}

const (
	demoStudy   = "Harbour cargo, mid-2025 renewal"
	demoPurpose = "Severity of harbour cargo losses for the price of layers above 25,000"
)

// present makes the finished study: a first look at all claims of the line,
// and a revision without the youngest quarter.
func present(ctx context.Context, io *streams, store *storage.Store, batches []study.BatchRef) error {
	studies, err := store.Studies(ctx)
	if err != nil || len(studies) > 0 {
		return err
	}
	ids := make([]storage.BatchID, len(batches))
	for i, b := range batches {
		ids[i] = storage.BatchID(b.ID)
	}
	book, err := store.Book(ctx, ids)
	if err != nil {
		return err
	}
	id, err := store.CreateStudy(ctx, demoStudy, demoPurpose)
	if err != nil {
		return err
	}
	a := study.Default(batches, 0)
	a.Businesses = []string{"harbour cargo"}
	a.Layers = []study.LayerTerm{{Limit: 25000}, {Limit: 25000, Attachment: 25000}, {Limit: 25000, Attachment: 50000}, {Attachment: 75000}}
	for i, note := range []string{
		"All claims of the line at their latest valuation.",
		"Losses of the youngest quarter left out: too many of them are still to be reported.",
	} {
		if i == 1 {
			if a.LossTo, err = claims.ParseDate("2025-03-31"); err != nil {
				return err
			}
		}
		results, err := study.Run(book, a)
		if err != nil {
			return err
		}
		revision := storage.Revision{Assumptions: a, Results: results, ProgramVersion: version(), Author: "demonstration", Note: note}
		if _, err := store.AddRevision(ctx, id, i, revision); err != nil {
			return err
		}
	}
	_, err = fmt.Fprintf(io.err, "study %q: 2 revisions\n", demoStudy)
	return err
}
