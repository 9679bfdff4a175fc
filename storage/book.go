package storage

import (
	"context"
	"database/sql"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"sync"

	"spillway/severity/claims"
	"spillway/storage/extract"
)

// batchColumns are the columns of one batch in memory.
type batchColumns struct {
	rows                      int
	line                      []int32
	id                        []string // only when asked for
	lossDate                  []claims.Date
	status                    []claims.Status
	terms                     []claims.TermFlags
	paid, outstanding         []int64
	deductible, limit         []int64
	business, segment         []uint16
	businesses, segments      []string
	businessCode, segmentCode map[string]uint16
	weight                    []float64 // nil when all are 1
	weighted                  bool
}

// loadColumns reads the chunks of a batch, several at a time. ids are read
// only when batches have to be matched by them.
func (s *Store) loadColumns(ctx context.Context, batch BatchID, ids bool) (*batchColumns, error) {
	total, err := s.columnRows(ctx, batch)
	if err != nil {
		return nil, err
	}
	c := &batchColumns{
		rows: total, line: make([]int32, total), lossDate: make([]claims.Date, total), status: make([]claims.Status, total),
		terms: make([]claims.TermFlags, total), paid: make([]int64, total), outstanding: make([]int64, total),
		deductible: make([]int64, total), limit: make([]int64, total), business: make([]uint16, total), segment: make([]uint16, total),
		weight: make([]float64, total), businessCode: map[string]uint16{}, segmentCode: map[string]uint16{},
	}
	if ids {
		c.id = make([]string, total)
	}
	tasks := make(chan string, len(columnNames))
	for _, name := range columnNames {
		if name != columnID || ids {
			tasks <- name
		}
	}
	close(tasks)
	errs := make([]error, 2)
	var wait sync.WaitGroup
	for i := range errs {
		wait.Go(func() {
			for name := range tasks {
				if errs[i] == nil {
					errs[i] = s.loadColumn(ctx, batch, name, c)
				}
			}
		})
	}
	wait.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, fmt.Errorf("batch %d: %w", batch, err)
		}
	}
	if !c.weighted {
		c.weight = nil
	}
	return c, nil
}

// columnRows is the number of rows in the chunks of a batch, which are made
// again from its claims where they are missing.
func (s *Store) columnRows(ctx context.Context, batch BatchID) (int, error) {
	var have, want int
	err := s.reader.QueryRowContext(ctx, `select b.rows_accepted,
			coalesce((select min(n) from (select sum(c.rows) n from claim_columns c where c.batch_id = b.id group by c.name)), 0)
			* ((select count(distinct name) from claim_columns c where c.batch_id = b.id) = ?2)
		from batches b where b.id = ?1`, batch, len(columnNames)).Scan(&want, &have)
	if err := lookedUp(err, "batch", int64(batch)); err != nil {
		return 0, err
	}
	if have != want {
		if err := s.rebuildColumns(ctx, batch); err != nil {
			return 0, err
		}
	}
	return want, nil
}

func (s *Store) loadColumn(ctx context.Context, batch BatchID, name string, c *batchColumns) error {
	rows, err := s.reader.QueryContext(ctx, "select rows, data from claim_columns where batch_id = ?1 and name = ?2 order by chunk", batch, name)
	if err != nil {
		return plain(err)
	}
	defer rows.Close()
	at := 0
	for rows.Next() {
		var n int
		var packed sql.RawBytes
		if err := rows.Scan(&n, &packed); err != nil {
			return plain(err)
		}
		chunk, err := unpack(packed)
		if err != nil {
			return fmt.Errorf("column %s: %w", name, err)
		}
		if at+n > c.rows {
			return fmt.Errorf("column %s: %w", name, errChunk)
		}
		c.fill(name, chunk, at, at+n)
		if chunk.err != nil || len(chunk.data) > 0 {
			return fmt.Errorf("column %s: %w", name, errChunk)
		}
		at += n
	}
	return plain(rows.Err())
}

// fill decodes one chunk of one column into rows [from, to).
func (c *batchColumns) fill(name string, in *chunkReader, from, to int) {
	switch name {
	case columnLine:
		line := int64(0)
		for i := from; i < to; i++ {
			line += in.int()
			c.line[i] = int32(line)
		}
	case columnID:
		last := ""
		for i := from; i < to; i++ {
			shared := in.uint()
			rest := in.bytes(in.uint())
			if shared > uint64(len(last)) {
				in.err = errChunk
				return
			}
			last = last[:shared] + string(rest)
			c.id[i] = last
		}
	case columnLossDate:
		for i := from; i < to; i++ {
			c.lossDate[i] = claims.Date(in.uint())
		}
	case columnStatus:
		for i, b := range in.bytes(uint64(to - from)) {
			c.status[from+i] = claims.Status(b)
		}
	case columnTerms:
		for i, b := range in.bytes(uint64(to - from)) {
			c.terms[from+i] = claims.TermFlags(b)
		}
	case columnPaid:
		for i := from; i < to; i++ {
			c.paid[i] = in.int()
		}
	case columnOutstanding:
		for i := from; i < to; i++ {
			c.outstanding[i] = in.int()
		}
	case columnDeductible:
		for i := from; i < to; i++ {
			c.deductible[i] = in.optional()
		}
	case columnLimit:
		for i := from; i < to; i++ {
			c.limit[i] = in.optional()
		}
	case columnBusiness:
		codes := in.dictionary(c.businessCode, &c.businesses)
		in.coded(codes, c.business[from:to])
	case columnSegment:
		codes := in.dictionary(c.segmentCode, &c.segments)
		in.coded(codes, c.segment[from:to])
	case columnWeight:
		if len(in.data) == 0 {
			for i := from; i < to; i++ {
				c.weight[i] = 1
			}
			return
		}
		c.weighted = true
		for i := from; i < to; i++ {
			if b := in.bytes(8); b != nil {
				c.weight[i] = math.Float64frombits(binary.LittleEndian.Uint64(b))
			}
		}
	}
}

// maxTexts bounds the distinct lines of business and segments of a book.
const maxTexts = math.MaxUint16

// dictionary reads a chunk's texts and gives the batch's code of each.
func (in *chunkReader) dictionary(codes map[string]uint16, texts *[]string) []uint16 {
	n := in.uint()
	if n > uint64(len(in.data)) && n > 0 {
		in.err = errChunk
		return nil
	}
	local := make([]uint16, n)
	for k := range local {
		text := string(in.bytes(in.uint()))
		code, ok := codes[text]
		if !ok {
			if len(*texts) >= maxTexts {
				in.err = fmt.Errorf("more than %d distinct texts in one column", maxTexts)
				return nil
			}
			code = uint16(len(*texts))
			codes[text] = code
			*texts = append(*texts, text)
		}
		local[k] = code
	}
	return local
}

func (in *chunkReader) coded(local []uint16, to []uint16) {
	for i := range to {
		code := in.uint()
		if code >= uint64(len(local)) {
			in.err = errChunk
			return
		}
		to[i] = local[code]
	}
}

// rebuildColumns makes the chunks of a batch from its rows.
func (s *Store) rebuildColumns(ctx context.Context, batch BatchID) error {
	var decimals int8
	err := s.reader.QueryRowContext(ctx, "select decimals from batches where id = ?1", batch).Scan(&decimals)
	if err := lookedUp(err, "batch", int64(batch)); err != nil {
		return err
	}
	return s.inTransaction(ctx, func(tx *sql.Tx) error {
		if _, err := tx.ExecContext(ctx, "delete from claim_columns where batch_id = ?1", batch); err != nil {
			return plain(err)
		}
		rows, err := s.reader.QueryContext(ctx, selectClaims+" where c.batch_id = ?1 order by c.line", batch)
		if err != nil {
			return plain(err)
		}
		defer rows.Close()
		b := newColumnBuilder(decimals)
		for rows.Next() {
			c, err := scanClaim(rows, decimals)
			if err != nil {
				return err
			}
			b.add(&c.Claim)
			if err := b.flush(ctx, tx, batch, false); err != nil {
				return plain(err)
			}
		}
		if err := rows.Err(); err != nil {
			return plain(err)
		}
		return plain(b.flush(ctx, tx, batch, true))
	})
}

// Book returns the claims of batches in columns, each claim once, at its
// latest valuation: of several batches of one source that hold the same claim
// id the one with the latest valuation date counts, at a tie the one accepted
// last. Books are cached and shared. ErrMixedCurrencies where the batches are
// in several currencies.
func (s *Store) Book(ctx context.Context, ids []BatchID) (*claims.Book, error) {
	ids = slices.Clone(ids)
	slices.Sort(ids)
	ids = slices.Compact(ids)
	if len(ids) == 0 {
		return nil, fmt.Errorf("a book needs at least one batch: %w", ErrNotFound)
	}
	if len(ids) > math.MaxUint8 {
		return nil, fmt.Errorf("%d batches in one book: at most %d", len(ids), math.MaxUint8)
	}
	key := fmt.Sprint(ids)
	return s.books.get(key, func() (*claims.Book, error) {
		// Others may wait for the same book: one who gives up does not end it.
		return s.makeBook(context.WithoutCancel(ctx), ids)
	})
}

func (s *Store) makeBook(ctx context.Context, ids []BatchID) (*claims.Book, error) {
	heads := make([]bookHead, len(ids))
	for i, id := range ids {
		var err error
		if heads[i], err = s.bookHead(ctx, id); err != nil {
			return nil, err
		}
		if heads[i].currency != heads[0].currency {
			return nil, fmt.Errorf("%w: batch %d is in %s, batch %d in %s", ErrMixedCurrencies, ids[0], heads[0].currency, id, heads[i].currency)
		}
	}
	sources := map[int64]int{}
	for _, h := range heads {
		sources[h.source]++
	}
	parts := make([]*batchColumns, len(ids))
	for i, id := range ids {
		var err error
		if parts[i], err = s.loadColumns(ctx, id, sources[heads[i].source] > 1); err != nil {
			return nil, err
		}
	}
	return merge(heads, parts), nil
}

type bookHead struct {
	claims.BookBatch
	source   int64
	currency string
	decimals int8
}

func (s *Store) bookHead(ctx context.Context, id BatchID) (h bookHead, err error) {
	var planText string
	err = s.reader.QueryRowContext(ctx, "select name, sha256, plan, source_id, currency, decimals from batches where id = ?1", id).
		Scan(&h.Name, &h.Digest, &planText, &h.source, &h.currency, &h.decimals)
	if err := lookedUp(err, "batch", int64(id)); err != nil {
		return h, err
	}
	var plan extract.Plan
	if err := json.Unmarshal([]byte(planText), &plan); err != nil {
		return h, fmt.Errorf("batch %d: plan: %w", id, err)
	}
	h.ID, h.Basis = int64(id), plan.Basis
	return h, nil
}
