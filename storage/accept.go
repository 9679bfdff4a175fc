package storage

import (
	"context"
	"database/sql"
	"encoding/json"
	"fmt"
	"strings"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

// Accept turns a checked upload into a batch, in one transaction: claims,
// rejected rows with their reasons, columns and totals, or nothing of it.
// progress, if not nil, is told the rows read from time to time. A claim id
// that an earlier batch of the same source holds is a later valuation of that
// claim, and counted as such.
func (s *Store) Accept(ctx context.Context, id UploadID, name string, progress func(rows int)) (BatchID, error) {
	u, err := s.Upload(ctx, id)
	if err != nil {
		return 0, err
	}
	if u.State != "open" {
		return 0, fmt.Errorf("upload %d: %w", id, ErrClosed)
	}
	r, done, err := s.read(u)
	if err != nil {
		return 0, err
	}
	defer done()
	var batch BatchID
	err = s.inTransaction(ctx, func(tx *sql.Tx) error {
		batch, err = s.accept(ctx, tx, u, name, r, progress)
		return err
	})
	if uniqueViolation(err) {
		var existing BatchID
		if s.reader.QueryRowContext(ctx, "select id from batches where sha256 = ?1", u.SHA256).Scan(&existing) == nil {
			return 0, &DuplicateBatch{existing}
		}
	}
	if err != nil {
		return 0, fmt.Errorf("upload %d: %w", id, plain(err))
	}
	return batch, nil
}

func (s *Store) accept(ctx context.Context, tx *sql.Tx, u *Upload, name string, r *extract.Reader, progress func(int)) (BatchID, error) {
	// A batch never changes, and its counts are known only when all claims are
	// in: its number is settled first, its row written last, and the claims'
	// foreign key judged at the commit.
	var next int64
	if err := tx.QueryRowContext(ctx, "select coalesce(max(id), 0) + 1 from batches").Scan(&next); err != nil {
		return 0, err
	}
	if _, err := tx.ExecContext(ctx, "pragma defer_foreign_keys = 1"); err != nil {
		return 0, err
	}
	decimals := extract.MinorDigits(u.Plan.Basis.Currency)
	w, err := newClaimWriter(ctx, tx, BatchID(next), decimals)
	if err != nil {
		return 0, err
	}
	if err := w.copyFrom(ctx, r, progress); err != nil {
		return 0, err
	}
	report := r.Report()
	if err := report.Reconciles(); err != nil {
		return 0, fmt.Errorf("nothing is stored: %w", err)
	}
	if report.Accepted == 0 {
		return 0, fmt.Errorf("%w: all %d are rejected", ErrNothingAccepted, report.Read)
	}
	plan := *u.Plan
	plan.Basis = r.Basis()
	if err := s.insertBatch(ctx, tx, BatchID(next), u, name, plan, r.Header(), report); err != nil {
		return 0, err
	}
	return BatchID(next), nil
}

func (s *Store) insertBatch(ctx context.Context, tx *sql.Tx, id BatchID, u *Upload, name string, plan extract.Plan, header []string, report *extract.Report) error {
	texts := make([]string, 3)
	for i, v := range []any{plan, report, header} {
		text, err := json.Marshal(v)
		if err != nil {
			return err
		}
		texts[i] = string(text)
	}
	var later int
	err := tx.QueryRowContext(ctx, `select count(*) from claims c where c.batch_id = ?1
		and exists (select 1 from batches b where b.source_id = (select source_id from uploads where id = ?2))
		and exists (select 1 from claims o join batches b on b.id = o.batch_id
			where o.claim_id = c.claim_id and o.batch_id <> ?1 and b.source_id = (select source_id from uploads where id = ?2))`, id, u.ID).Scan(&later)
	if err != nil {
		return err
	}
	now := s.timestamp()
	_, err = tx.ExecContext(ctx, `insert into batches (id, upload_id, source_id, name, file_name, sha256, bytes, plan, report, header,
			currency, decimals, valuation, rows_read, rows_accepted, rows_rejected, later_valuations, accepted_at)
		select ?1, u.id, u.source_id, ?3, u.file_name, u.sha256, u.bytes, ?4, ?5, ?6, ?7, ?8, ?9, ?10, ?11, ?12, ?13, ?14
		from uploads u where u.id = ?2`,
		id, u.ID, name, texts[0], texts[1], texts[2], plan.Basis.Currency, extract.MinorDigits(plan.Basis.Currency), stored(plan.Basis.Valuation),
		report.Read, report.Accepted, report.Rejected, later, now)
	if err != nil {
		return err
	}
	if _, err := tx.ExecContext(ctx, "update sources set plan = ?2 where id = (select source_id from uploads where id = ?1)", u.ID, texts[0]); err != nil {
		return err
	}
	result, err := tx.ExecContext(ctx, "update uploads set state = 'accepted' where id = ?1 and state = 'open'", u.ID)
	if err != nil {
		return err
	}
	if n, err := result.RowsAffected(); err != nil || n != 1 {
		return fmt.Errorf("upload %d: %w", u.ID, ErrClosed)
	}
	return nil
}

// claimWriter inserts rows many to a statement and builds the columns beside.
type claimWriter struct {
	tx       *sql.Tx
	batch    BatchID
	decimals int8
	many     *sql.Stmt
	one      *sql.Stmt
	rejected *sql.Stmt
}

const claimFields = 16

// rowsPerInsert rows go into one statement: fewer crossings into SQLite.
const rowsPerInsert = 64

func newClaimWriter(ctx context.Context, tx *sql.Tx, batch BatchID, decimals int8) (*claimWriter, error) {
	w := &claimWriter{tx: tx, batch: batch, decimals: decimals}
	var err error
	if w.many, err = tx.PrepareContext(ctx, insertClaims(rowsPerInsert)); err != nil {
		return nil, err
	}
	if w.one, err = tx.PrepareContext(ctx, insertClaims(1)); err != nil {
		return nil, err
	}
	w.rejected, err = tx.PrepareContext(ctx, "insert into rejected_rows (batch_id, line, cells, findings) values (?1, ?2, ?3, ?4)")
	return w, err
}

func insertClaims(rows int) string {
	one := "(?" + strings.Repeat(", ?", claimFields-1) + ")"
	return `insert into claims (batch_id, line, claim_id, loss_date, report_date, close_date, status, business, segment,
		paid, outstanding, deductible, limit_amount, limit_reached, deductible_type, weight) values ` + one + strings.Repeat(", "+one, rows-1)
}

// parcel is a run of checked rows on its way from the reader to the database.
type parcel struct {
	claims   []claims.Claim
	rejected []rejectedRow
	read     int
}

type rejectedRow struct {
	line            int
	cells, findings string
}

// copyFrom reads and checks in one goroutine and inserts in this one.
func (w *claimWriter) copyFrom(ctx context.Context, r *extract.Reader, progress func(int)) error {
	ctx, stop := context.WithCancel(ctx)
	parcels := make(chan parcel, 4)
	readErr := make(chan error, 1)
	defer func() {
		stop()
		for range parcels { // the reader must end before its file is closed
		}
	}()
	go func() {
		defer close(parcels)
		readErr <- readParcels(ctx, r, parcels)
	}()
	columns := newColumnBuilder(w.decimals)
	for p := range parcels {
		if err := w.insert(ctx, p); err != nil {
			return err
		}
		for i := range p.claims {
			columns.add(&p.claims[i])
		}
		if err := columns.flush(ctx, w.tx, w.batch, false); err != nil {
			return err
		}
		if progress != nil {
			progress(p.read)
		}
	}
	if err := <-readErr; err != nil {
		return err
	}
	return columns.flush(ctx, w.tx, w.batch, true)
}

func readParcels(ctx context.Context, r *extract.Reader, out chan<- parcel) error {
	const size = 1024
	p := parcel{claims: make([]claims.Claim, 0, size)}
	send := func() bool {
		select {
		case out <- p:
			p = parcel{claims: make([]claims.Claim, 0, size), read: p.read}
			return true
		case <-ctx.Done():
			return false
		}
	}
	for r.Next() {
		row := r.Row()
		p.read++
		if row.Rejected {
			cells, err := json.Marshal(row.Cells())
			if err != nil {
				return err
			}
			findings, err := json.Marshal(row.Findings)
			if err != nil {
				return err
			}
			p.rejected = append(p.rejected, rejectedRow{row.Line, string(cells), string(findings)})
		} else {
			p.claims = append(p.claims, row.Claim)
		}
		if len(p.claims) == size || len(p.rejected) == size {
			if !send() {
				return ctx.Err()
			}
		}
	}
	if err := r.Err(); err != nil {
		return err
	}
	if !send() {
		return ctx.Err()
	}
	return nil
}

func (w *claimWriter) insert(ctx context.Context, p parcel) error {
	args := make([]any, 0, rowsPerInsert*claimFields)
	for i := range p.claims {
		var err error
		if args, err = w.appendArgs(args, &p.claims[i]); err != nil {
			return err
		}
		if len(args) == rowsPerInsert*claimFields {
			if _, err := w.many.ExecContext(ctx, args...); err != nil {
				return err
			}
			args = args[:0]
		}
	}
	for ; len(args) > 0; args = args[claimFields:] {
		if _, err := w.one.ExecContext(ctx, args[:claimFields]...); err != nil {
			return err
		}
	}
	for _, row := range p.rejected {
		if _, err := w.rejected.ExecContext(ctx, w.batch, row.line, row.cells, row.findings); err != nil {
			return err
		}
	}
	return nil
}

func (w *claimWriter) appendArgs(args []any, c *claims.Claim) ([]any, error) {
	minor := func(a claims.Amount) (int64, error) {
		units, whole := a.MinorUnits(int(w.decimals))
		if !whole {
			return 0, fmt.Errorf("line %d: amount %s is finer than the currency's minor unit", c.Line, a)
		}
		return units, nil
	}
	paid, err1 := minor(c.Paid)
	outstanding, err2 := minor(c.Outstanding)
	for _, err := range []error{err1, err2} {
		if err != nil {
			return nil, err
		}
	}
	var deductible, limit any
	if c.HasDeductible {
		units, err := minor(c.Deductible)
		if err != nil {
			return nil, err
		}
		deductible = units
	}
	if c.HasLimit {
		units, err := minor(c.Limit)
		if err != nil {
			return nil, err
		}
		limit = units
	}
	return append(args, int64(w.batch), int64(c.Line), c.ID, stored(c.LossDate), stored(c.ReportDate), stored(c.CloseDate), int64(c.Status),
		c.Business, c.Segment, paid, outstanding, deductible, limit, int64(c.LimitReached), int64(c.DeductibleType), c.Weight), nil
}
