// Package storage keeps uploads, batches, claims, studies and revisions in one
// SQLite file, and the uploaded files beside it.
package storage

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io/fs"
	"net/url"
	"os"
	"path/filepath"
	"time"

	"github.com/mattn/go-sqlite3"
	"github.com/pressly/goose/v3"

	"spillway/migrations"
)

// applicationID marks a database file as this program's ("Spil").
const applicationID = 0x5370696c

// Store is an open database. It is safe for use by several goroutines; several
// processes may have the same file open.
type Store struct {
	writer *sql.DB // one connection: writes queue here, not in SQLite
	reader *sql.DB
	files  string // folder of the uploaded files
	now    func() time.Time
	books  bookCache
}

// Open opens the database at path, creating it where there is none, and brings
// its schema up to date. It refuses a file of another program, a file newer
// than this program, and one that is damaged. now is the clock for what is
// recorded.
func Open(ctx context.Context, path string, now func() time.Time) (*Store, error) {
	if err := os.MkdirAll(filepath.Dir(path), 0o700); err != nil {
		return nil, fmt.Errorf("database folder: %w", err)
	}
	s := &Store{files: path + "-files", now: now}
	if err := whose(ctx, path); err != nil {
		return nil, fmt.Errorf("database %s: %w", path, plain(err))
	}
	var err error
	if s.writer, err = sql.Open("sqlite3", dsn(path, false)); err != nil {
		return nil, fmt.Errorf("database %s: %w", path, err)
	}
	s.writer.SetMaxOpenConns(1)
	if err := s.prepare(ctx); err != nil {
		s.writer.Close()
		return nil, fmt.Errorf("database %s: %w", path, plain(err))
	}
	if err := os.MkdirAll(s.files, 0o700); err != nil {
		s.writer.Close()
		return nil, fmt.Errorf("folder of uploaded files: %w", err)
	}
	if s.reader, err = sql.Open("sqlite3", dsn(path, true)); err != nil {
		s.writer.Close()
		return nil, fmt.Errorf("database %s: %w", path, err)
	}
	s.reader.SetMaxOpenConns(8)
	if err := readBack(ctx, s.reader); err != nil {
		s.Close()
		return nil, fmt.Errorf("database %s: %w", path, plain(err))
	}
	return s, nil
}

// dsn carries the settings of every connection of a pool: a pragma executed
// once would reach one of them.
func dsn(path string, readOnly bool) string {
	q := url.Values{}
	q.Set("_busy_timeout", "10000")
	q.Set("_foreign_keys", "1")
	q.Set("_synchronous", "1")
	q.Set("_journal_mode", "WAL")
	if readOnly {
		q.Set("mode", "ro")
		q.Set("_query_only", "1")
		q.Del("_journal_mode")
	} else {
		q.Set("_txlock", "immediate")
	}
	return "file:" + (&url.URL{Path: path}).EscapedPath() + "?" + q.Encode()
}

// whose reads the mark of an existing file without changing anything in it.
func whose(ctx context.Context, path string) error {
	if stat, err := os.Stat(path); errors.Is(err, os.ErrNotExist) || err == nil && stat.Size() == 0 {
		return nil
	}
	db, err := sql.Open("sqlite3", "file:"+(&url.URL{Path: path}).EscapedPath()+"?mode=ro&_busy_timeout=10000")
	if err != nil {
		return err
	}
	defer db.Close()
	var id, tables int
	if err := db.QueryRowContext(ctx, "pragma application_id").Scan(&id); err != nil {
		return err
	}
	if err := db.QueryRowContext(ctx, "select count(*) from sqlite_schema").Scan(&tables); err != nil {
		return err
	}
	if id != applicationID && (id != 0 || tables > 0) {
		return fmt.Errorf("%w (application id %#x); choose another file, or an empty one", ErrForeignFile, id)
	}
	return nil
}

// prepare checks the settings and migrates.
func (s *Store) prepare(ctx context.Context) error {
	if err := readBack(ctx, s.writer); err != nil {
		return err
	}
	if _, err := s.writer.ExecContext(ctx, fmt.Sprintf("pragma application_id = %d", applicationID)); err != nil {
		return err
	}
	steps, err := fs.Sub(migrations.SQLite, "sqlite")
	if err != nil {
		return err
	}
	return migrate(ctx, s.writer, steps)
}

// migrate applies the steps that are missing, each in a transaction of its own.
func migrate(ctx context.Context, db *sql.DB, steps fs.FS) error {
	provider, err := goose.NewProvider(goose.DialectSQLite3, db, steps)
	if err != nil {
		return fmt.Errorf("migrations: %w", err)
	}
	have, want, err := provider.GetVersions(ctx)
	for attempt := 0; err != nil && attempt < 20 && ctx.Err() == nil; attempt++ {
		have, want, err = provider.GetVersions(ctx) // another start may be making the table of versions
	}
	if err != nil {
		return fmt.Errorf("schema version: %w", err)
	}
	if have > want {
		return fmt.Errorf("%w: the file has schema %d, this program knows %d; use the newer program", ErrNewerFile, have, want)
	}
	// Of several programs that start at once one applies a step and the others
	// fail on it: the step is there all the same, so they go on from it.
	for attempt := 0; have < want; attempt++ {
		_, upErr := provider.Up(ctx)
		if upErr == nil {
			break
		}
		before := have
		if have, _, err = provider.GetVersions(ctx); err != nil || have == before && attempt > 20 {
			return fmt.Errorf("migrations: %w", errors.Join(upErr, err))
		}
	}
	rows, err := db.QueryContext(ctx, "pragma foreign_key_check")
	if err != nil {
		return err
	}
	defer rows.Close()
	if rows.Next() {
		return errors.New("migrations: rows refer to others that are not there")
	}
	return rows.Err()
}

// readBack makes sure that a connection runs under the settings asked for.
func readBack(ctx context.Context, db *sql.DB) error {
	for pragma, want := range map[string]string{"foreign_keys": "1", "journal_mode": "wal", "synchronous": "1"} {
		var got string
		if err := db.QueryRowContext(ctx, "pragma "+pragma).Scan(&got); err != nil {
			return err
		}
		if got != want {
			return fmt.Errorf("setting %s is %q, want %q: is the folder on a network or read-only?", pragma, got, want)
		}
	}
	return nil
}

// Close releases the database.
func (s *Store) Close() error {
	var readerErr error
	if s.reader != nil {
		readerErr = s.reader.Close()
	}
	return errors.Join(readerErr, s.writer.Close())
}

// Health tells whether the database answers.
func (s *Store) Health(ctx context.Context) error {
	var one int
	return s.reader.QueryRowContext(ctx, "select count(*) from sources").Scan(&one)
}

// inTransaction runs f in one write transaction: all of it or nothing.
func (s *Store) inTransaction(ctx context.Context, f func(*sql.Tx) error) error {
	tx, err := s.writer.BeginTx(ctx, nil)
	if err != nil {
		return plain(err)
	}
	if err := f(tx); err != nil {
		return errors.Join(err, ignoreDone(tx.Rollback()))
	}
	return plain(tx.Commit())
}

func ignoreDone(err error) error {
	if errors.Is(err, sql.ErrTxDone) {
		return nil
	}
	return err
}

func (s *Store) timestamp() string { return s.now().UTC().Format(time.RFC3339) }

// plain turns the driver's codes into what a user can act on.
func plain(err error) error {
	var e sqlite3.Error
	if !errors.As(err, &e) {
		return err
	}
	switch e.Code {
	case sqlite3.ErrFull:
		return fmt.Errorf("the disk is full; nothing was stored: %w", err)
	case sqlite3.ErrReadonly, sqlite3.ErrPerm:
		return fmt.Errorf("the database cannot be written; check the permissions of its folder: %w", err)
	case sqlite3.ErrCantOpen:
		return fmt.Errorf("the database cannot be opened; check the path and its permissions: %w", err)
	case sqlite3.ErrCorrupt, sqlite3.ErrNotADB:
		return fmt.Errorf("%w; restore it from a backup: %w", ErrDamaged, err)
	case sqlite3.ErrBusy, sqlite3.ErrLocked:
		return fmt.Errorf("another process holds the database; try again: %w", err)
	}
	return err
}
