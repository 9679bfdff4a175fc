package storage

import (
	"context"
	"crypto/sha256"
	"database/sql"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"

	"spillway/storage/extract"
)

// Upload is a file as it came, on its way to a batch.
type Upload struct {
	ID       UploadID
	Source   string
	FileName string
	SHA256   string // hexadecimal
	Bytes    int64
	Plan     *extract.Plan   // nil until one is saved
	Report   *extract.Report // of the check under Plan; nil until checked
	State    string          // "open", "accepted", "discarded"
	Created  string          // RFC 3339
}

// CreateUpload stores a file as it came, at most max bytes of it, under its
// SHA-256. A *DuplicateBatch says that the very same file is a batch already;
// ErrTooLarge that it is longer than max. Nothing is kept in either case.
func (s *Store) CreateUpload(ctx context.Context, fileName, source string, body io.Reader, max int64) (*Upload, error) {
	temporary, err := os.CreateTemp(s.files, "incoming-*")
	if err != nil {
		return nil, fmt.Errorf("upload %q: %w", fileName, err)
	}
	defer os.Remove(temporary.Name())
	defer temporary.Close()
	digest := sha256.New()
	n, err := io.Copy(io.MultiWriter(temporary, digest), io.LimitReader(body, max+1))
	if err != nil {
		return nil, fmt.Errorf("upload %q: %w", fileName, err)
	}
	if n > max {
		return nil, fmt.Errorf("upload %q: %w: more than %d bytes", fileName, ErrTooLarge, max)
	}
	u := &Upload{Source: source, FileName: fileName, SHA256: hex.EncodeToString(digest.Sum(nil)), Bytes: n, State: "open", Created: s.timestamp()}
	var existing BatchID
	err = s.reader.QueryRowContext(ctx, "select id from batches where sha256 = ?1", u.SHA256).Scan(&existing)
	if err == nil {
		return nil, &DuplicateBatch{existing}
	} else if !errors.Is(err, sql.ErrNoRows) {
		return nil, plain(err)
	}
	if err := errors.Join(temporary.Sync(), temporary.Close()); err != nil {
		return nil, fmt.Errorf("upload %q: %w", fileName, err)
	}
	if err := os.Rename(temporary.Name(), s.filePath(u.SHA256)); err != nil {
		return nil, fmt.Errorf("upload %q: %w", fileName, err)
	}
	err = s.inTransaction(ctx, func(tx *sql.Tx) error {
		sourceID, err := sourceOf(ctx, tx, source, u.Created)
		if err != nil {
			return err
		}
		result, err := tx.ExecContext(ctx, "insert into uploads (source_id, file_name, sha256, bytes, created_at) values (?1, ?2, ?3, ?4, ?5)",
			sourceID, u.FileName, u.SHA256, u.Bytes, u.Created)
		if err != nil {
			return err
		}
		id, err := result.LastInsertId()
		u.ID = UploadID(id)
		return err
	})
	if err != nil {
		return nil, fmt.Errorf("upload %q: %w", fileName, plain(err))
	}
	return u, nil
}

func sourceOf(ctx context.Context, tx *sql.Tx, name, now string) (id int64, err error) {
	if _, err := tx.ExecContext(ctx, "insert into sources (name, created_at) values (?1, ?2) on conflict (name) do nothing", name, now); err != nil {
		return 0, err
	}
	err = tx.QueryRowContext(ctx, "select id from sources where name = ?1", name).Scan(&id)
	return id, err
}

func (s *Store) filePath(digest string) string { return filepath.Join(s.files, digest) }

// Upload returns one upload, or ErrNotFound.
func (s *Store) Upload(ctx context.Context, id UploadID) (*Upload, error) {
	u := &Upload{ID: id}
	var plan, report sql.NullString
	err := s.reader.QueryRowContext(ctx, `select s.name, u.file_name, u.sha256, u.bytes, u.plan, u.report, u.state, u.created_at
		from uploads u join sources s on s.id = u.source_id where u.id = ?1`, id).
		Scan(&u.Source, &u.FileName, &u.SHA256, &u.Bytes, &plan, &report, &u.State, &u.Created)
	if err := lookedUp(err, "upload", int64(id)); err != nil {
		return nil, err
	}
	if plan.Valid {
		if err := json.Unmarshal([]byte(plan.String), &u.Plan); err != nil {
			return nil, fmt.Errorf("upload %d: plan: %w", id, err)
		}
	}
	if report.Valid {
		if err := json.Unmarshal([]byte(report.String), &u.Report); err != nil {
			return nil, fmt.Errorf("upload %d: report: %w", id, err)
		}
	}
	return u, nil
}

func lookedUp(err error, what string, id int64) error {
	if errors.Is(err, sql.ErrNoRows) {
		return fmt.Errorf("%s %d: %w", what, id, ErrNotFound)
	}
	if err != nil {
		return fmt.Errorf("%s %d: %w", what, id, plain(err))
	}
	return nil
}

// OpenUploads lists the uploads that are neither accepted nor discarded, the
// latest first.
func (s *Store) OpenUploads(ctx context.Context) ([]Upload, error) {
	rows, err := s.reader.QueryContext(ctx, `select u.id, s.name, u.file_name, u.sha256, u.bytes, u.created_at
		from uploads u join sources s on s.id = u.source_id where u.state = 'open' order by u.id desc limit 50`)
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var list []Upload
	for rows.Next() {
		u := Upload{State: "open"}
		if err := rows.Scan(&u.ID, &u.Source, &u.FileName, &u.SHA256, &u.Bytes, &u.Created); err != nil {
			return nil, err
		}
		list = append(list, u)
	}
	return list, rows.Err()
}

// OpenFile opens the file of an upload or batch by its digest.
func (s *Store) OpenFile(digest string) (file *os.File, size int64, err error) {
	file, err = os.Open(s.filePath(digest))
	if err != nil {
		return nil, 0, fmt.Errorf("uploaded file %s: %w", digest, err)
	}
	stat, err := file.Stat()
	if err != nil {
		file.Close()
		return nil, 0, fmt.Errorf("uploaded file %s: %w", digest, err)
	}
	return file, stat.Size(), nil
}

// SavePlan records how an open upload is to be read. A report made under
// another plan is gone with it.
func (s *Store) SavePlan(ctx context.Context, id UploadID, plan extract.Plan) error {
	text, err := json.Marshal(plan)
	if err != nil {
		return fmt.Errorf("upload %d: plan: %w", id, err)
	}
	return s.changeUpload(ctx, id, "update uploads set plan = ?2, report = null where id = ?1 and state = 'open'", string(text))
}

// DiscardUpload closes an upload without a batch and removes its file.
func (s *Store) DiscardUpload(ctx context.Context, id UploadID) error {
	u, err := s.Upload(ctx, id)
	if err != nil {
		return err
	}
	if err := s.changeUpload(ctx, id, "update uploads set state = 'discarded' where id = ?1 and state = 'open' and ?2 = ''", ""); err != nil {
		return err
	}
	var others int
	err = s.reader.QueryRowContext(ctx, "select count(*) from uploads where sha256 = ?1 and state <> 'discarded'", u.SHA256).Scan(&others)
	if err != nil {
		return plain(err)
	}
	if others == 0 {
		if err := os.Remove(s.filePath(u.SHA256)); err != nil && !errors.Is(err, os.ErrNotExist) {
			return fmt.Errorf("upload %d: %w", id, err)
		}
	}
	return nil
}

func (s *Store) changeUpload(ctx context.Context, id UploadID, statement, value string) error {
	return s.inTransaction(ctx, func(tx *sql.Tx) error {
		result, err := tx.ExecContext(ctx, statement, id, value)
		if err != nil {
			return fmt.Errorf("upload %d: %w", id, plain(err))
		}
		if n, err := result.RowsAffected(); err != nil || n == 1 {
			return err
		}
		return fmt.Errorf("upload %d: %w", id, ErrClosed)
	})
}

// Check reads the whole file of an open upload under its plan, keeps the
// report and returns it.
func (s *Store) Check(ctx context.Context, id UploadID) (*extract.Report, error) {
	u, err := s.Upload(ctx, id)
	if err != nil {
		return nil, err
	}
	r, done, err := s.read(u)
	if err != nil {
		return nil, err
	}
	defer done()
	for r.Next() {
		if r.Row().Line%4096 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
	}
	if err := r.Err(); err != nil {
		return nil, err
	}
	report := r.Report()
	text, err := json.Marshal(report)
	if err != nil {
		return nil, fmt.Errorf("upload %d: report: %w", id, err)
	}
	return report, s.changeUpload(ctx, id, "update uploads set report = ?2 where id = ?1 and state = 'open'", string(text))
}

// Read opens the file of an upload under its plan; done closes it.
func (s *Store) read(u *Upload) (r *extract.Reader, done func(), err error) {
	if u.Plan == nil {
		return nil, nil, fmt.Errorf("upload %d: no plan yet: its columns and basis have to be stated first", u.ID)
	}
	file, size, err := s.OpenFile(u.SHA256)
	if err != nil {
		return nil, nil, err
	}
	r, err = extract.NewReader(file, size, *u.Plan)
	if err != nil {
		file.Close()
		return nil, nil, err
	}
	return r, func() { r.Close(); file.Close() }, nil
}

// WriteRejected writes the rejected rows of an open upload with their reasons.
func (s *Store) WriteRejected(ctx context.Context, id UploadID, w io.Writer) error {
	u, err := s.Upload(ctx, id)
	if err != nil {
		return err
	}
	r, done, err := s.read(u)
	if err != nil {
		return err
	}
	defer done()
	return extract.WriteRejected(w, r)
}

// RememberedPlan is the plan of the latest batch accepted from a source, nil
// where there is none.
func (s *Store) RememberedPlan(ctx context.Context, source string) (*extract.Plan, error) {
	var text sql.NullString
	err := s.reader.QueryRowContext(ctx, "select plan from sources where name = ?1", source).Scan(&text)
	if errors.Is(err, sql.ErrNoRows) || err == nil && !text.Valid {
		return nil, nil
	}
	if err != nil {
		return nil, plain(err)
	}
	plan := new(extract.Plan)
	if err := json.Unmarshal([]byte(text.String), plan); err != nil {
		return nil, fmt.Errorf("source %q: plan: %w", source, err)
	}
	return plan, nil
}

// Sources lists the names of the sources.
func (s *Store) Sources(ctx context.Context) ([]string, error) {
	rows, err := s.reader.QueryContext(ctx, "select name from sources order by name")
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var names []string
	for rows.Next() {
		var name string
		if err := rows.Scan(&name); err != nil {
			return nil, err
		}
		names = append(names, name)
	}
	return names, rows.Err()
}
