package storage

import (
	"errors"
	"fmt"

	"github.com/mattn/go-sqlite3"
)

var (
	// ErrNotFound: there is no such upload, batch, study or revision.
	ErrNotFound = errors.New("not found")
	// ErrForeignFile: the file belongs to another program.
	ErrForeignFile = errors.New("the file is a database of another program")
	// ErrNewerFile: the file was written by a newer program.
	ErrNewerFile = errors.New("the file is newer than this program")
	// ErrDamaged: the file is no whole database.
	ErrDamaged = errors.New("the database file is damaged")
	// ErrTooLarge: an upload exceeds the limit.
	ErrTooLarge = errors.New("the file is too large")
	// ErrClosed: the upload was accepted or discarded already.
	ErrClosed = errors.New("the upload is closed")
	// ErrNothingAccepted: every row of an upload is rejected.
	ErrNothingAccepted = errors.New("no row can be accepted")
	// ErrMixedCurrencies: the batches of one study are in several currencies.
	ErrMixedCurrencies = errors.New("batches in several currencies cannot be studied together")
)

// DuplicateBatch says that the same file was accepted before.
type DuplicateBatch struct{ Existing BatchID }

func (e *DuplicateBatch) Error() string {
	return fmt.Sprintf("the same file was accepted before, as batch %d", e.Existing)
}

// Conflict says that somebody else recorded a revision in the meantime.
type Conflict struct{ Latest int }

func (e *Conflict) Error() string {
	return fmt.Sprintf("revision %d was recorded in the meantime", e.Latest)
}

func uniqueViolation(err error) bool {
	var e sqlite3.Error
	return errors.As(err, &e) && (e.ExtendedCode == sqlite3.ErrConstraintUnique || e.ExtendedCode == sqlite3.ErrConstraintPrimaryKey)
}
