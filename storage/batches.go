package storage

import (
	"context"
	"database/sql"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

// Batch is an accepted upload with its account.
type Batch struct {
	ID              BatchID
	Source          string
	Name            string
	FileName        string
	SHA256          string
	Bytes           int64
	Plan            extract.Plan // its Basis is what the batch's figures mean
	Report          extract.Report
	Header          []string
	Currency        string
	Decimals        int8
	Valuation       claims.Date
	Read            int
	Accepted        int
	Rejected        int
	LaterValuations int // claims that an earlier accepted batch of the source values too
	AcceptedAt      string
}

// Batches lists all batches, the latest first, without plan, report and header.
func (s *Store) Batches(ctx context.Context) ([]Batch, error) {
	rows, err := s.reader.QueryContext(ctx, `select b.id, s.name, b.name, b.file_name, b.sha256, b.bytes, b.currency, b.decimals, b.valuation,
		b.rows_read, b.rows_accepted, b.rows_rejected, b.later_valuations, b.accepted_at
		from batches b join sources s on s.id = b.source_id order by b.id desc`)
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var list []Batch
	for rows.Next() {
		var b Batch
		var valuation int64
		if err := rows.Scan(&b.ID, &b.Source, &b.Name, &b.FileName, &b.SHA256, &b.Bytes, &b.Currency, &b.Decimals, &valuation,
			&b.Read, &b.Accepted, &b.Rejected, &b.LaterValuations, &b.AcceptedAt); err != nil {
			return nil, plain(err)
		}
		b.Valuation = dateOf(valuation)
		list = append(list, b)
	}
	return list, plain(rows.Err())
}

// BatchCount is the number of batches. Batches are never removed, so it also
// tells whether any has come since it was last asked for.
func (s *Store) BatchCount(ctx context.Context) (n int, err error) {
	err = s.reader.QueryRowContext(ctx, "select count(*) from batches").Scan(&n)
	return n, plain(err)
}

// Batch returns one batch, or ErrNotFound.
func (s *Store) Batch(ctx context.Context, id BatchID) (*Batch, error) {
	b := &Batch{ID: id}
	var valuation int64
	var plan, report, header string
	err := s.reader.QueryRowContext(ctx, `select s.name, b.name, b.file_name, b.sha256, b.bytes, b.plan, b.report, b.header, b.currency, b.decimals,
		b.valuation, b.rows_read, b.rows_accepted, b.rows_rejected, b.later_valuations, b.accepted_at
		from batches b join sources s on s.id = b.source_id where b.id = ?1`, id).
		Scan(&b.Source, &b.Name, &b.FileName, &b.SHA256, &b.Bytes, &plan, &report, &header, &b.Currency, &b.Decimals,
			&valuation, &b.Read, &b.Accepted, &b.Rejected, &b.LaterValuations, &b.AcceptedAt)
	if err := lookedUp(err, "batch", int64(id)); err != nil {
		return nil, err
	}
	b.Valuation = dateOf(valuation)
	for text, to := range map[string]any{plan: &b.Plan, report: &b.Report, header: &b.Header} {
		if err := json.Unmarshal([]byte(text), to); err != nil {
			return nil, fmt.Errorf("batch %d: %w", id, err)
		}
	}
	return b, nil
}

// StoredClaim is a claim with the batch that holds it.
type StoredClaim struct {
	claims.Claim
	Batch     BatchID
	BatchName string
	Valuation claims.Date
	Decimals  int8
}

const selectClaims = `select c.batch_id, b.name, b.valuation, c.line, c.claim_id, c.loss_date, c.report_date, c.close_date, c.status,
	c.business, c.segment, c.paid, c.outstanding, c.deductible, c.limit_amount, c.limit_reached, c.deductible_type, c.weight
	from claims c join batches b on b.id = c.batch_id`

func scanClaim(rows *sql.Rows, decimals int8) (StoredClaim, error) {
	c := StoredClaim{Decimals: decimals}
	var valuation, loss, report, closed int64
	var deductible, limit sql.NullInt64
	err := rows.Scan(&c.Batch, &c.BatchName, &valuation, &c.Line, &c.ID, &loss, &report, &closed, &c.Status,
		&c.Business, &c.Segment, &c.Paid.Units, &c.Outstanding.Units, &deductible, &limit, &c.LimitReached, &c.DeductibleType, &c.Weight)
	if err != nil {
		return c, plain(err)
	}
	c.Valuation, c.LossDate, c.ReportDate, c.CloseDate = dateOf(valuation), dateOf(loss), dateOf(report), dateOf(closed)
	c.HasDeductible, c.Deductible.Units = deductible.Valid, deductible.Int64
	c.HasLimit, c.Limit.Units = limit.Valid, limit.Int64
	for _, a := range []*claims.Amount{&c.Paid, &c.Outstanding, &c.Deductible, &c.Limit} {
		a.Decimals = int16(decimals)
	}
	return c, nil
}

// Claims lists claims of a batch with a line above after, in the order of
// lines, at most limit: the next page begins after the last line of this one.
func (s *Store) Claims(ctx context.Context, id BatchID, after, limit int) ([]StoredClaim, error) {
	b, err := s.decimals(ctx, id)
	if err != nil {
		return nil, err
	}
	rows, err := s.reader.QueryContext(ctx, selectClaims+" where c.batch_id = ?1 and c.line > ?2 order by c.line limit ?3", id, after, limit)
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var list []StoredClaim
	for rows.Next() {
		c, err := scanClaim(rows, b)
		if err != nil {
			return nil, err
		}
		list = append(list, c)
	}
	return list, plain(rows.Err())
}

func (s *Store) decimals(ctx context.Context, id BatchID) (d int8, err error) {
	err = s.reader.QueryRowContext(ctx, "select decimals from batches where id = ?1", id).Scan(&d)
	return d, lookedUp(err, "batch", int64(id))
}

// ClaimHistory lists the valuations of a claim over the batches of the source
// of one batch, in the order of their valuation dates; ErrNotFound where there
// is none.
func (s *Store) ClaimHistory(ctx context.Context, batch BatchID, claimID string) ([]StoredClaim, error) {
	d, err := s.decimals(ctx, batch)
	if err != nil {
		return nil, err
	}
	rows, err := s.reader.QueryContext(ctx, selectClaims+` where c.claim_id = ?1
		and b.source_id = (select source_id from batches where id = ?2) order by b.valuation, b.id`, claimID, batch)
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var list []StoredClaim
	for rows.Next() {
		c, err := scanClaim(rows, d)
		if err != nil {
			return nil, err
		}
		list = append(list, c)
	}
	if len(list) == 0 && rows.Err() == nil {
		return nil, fmt.Errorf("claim %q: %w", claimID, ErrNotFound)
	}
	return list, plain(rows.Err())
}

// WriteBatchRejected writes the rejected rows of a batch as CSV with their
// lines and reasons.
func (s *Store) WriteBatchRejected(ctx context.Context, id BatchID, w io.Writer) error {
	b, err := s.Batch(ctx, id)
	if err != nil {
		return err
	}
	out := csv.NewWriter(w)
	if err := extract.WriteRejectedHeader(out, b.Header); err != nil {
		return err
	}
	rows, err := s.reader.QueryContext(ctx, "select line, cells, findings from rejected_rows where batch_id = ?1 order by line", id)
	if err != nil {
		return plain(err)
	}
	defer rows.Close()
	for rows.Next() {
		var line int
		var cellsText, findingsText string
		if err := rows.Scan(&line, &cellsText, &findingsText); err != nil {
			return plain(err)
		}
		var cells []string
		var findings []extract.Finding
		if err := json.Unmarshal([]byte(cellsText), &cells); err != nil {
			return fmt.Errorf("batch %d, line %d: %w", id, line, err)
		}
		if err := json.Unmarshal([]byte(findingsText), &findings); err != nil {
			return fmt.Errorf("batch %d, line %d: %w", id, line, err)
		}
		if err := extract.WriteRejectedRow(out, line, extract.Reasons(findings), cells); err != nil {
			return err
		}
	}
	if err := rows.Err(); err != nil {
		return plain(err)
	}
	out.Flush()
	return out.Error()
}
