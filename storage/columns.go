package storage

import (
	"bytes"
	"compress/flate"
	"context"
	"database/sql"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"

	"spillway/severity/claims"
)

// The columns of a batch that a study needs, kept beside its rows in chunks:
// variable-length integers, texts as dictionary codes, compressed.
const (
	columnLine        = "line"
	columnID          = "claim_id"
	columnLossDate    = "loss_date"
	columnStatus      = "status"
	columnTerms       = "terms"
	columnPaid        = "paid"
	columnOutstanding = "outstanding"
	columnDeductible  = "deductible"
	columnLimit       = "limit"
	columnBusiness    = "business"
	columnSegment     = "segment"
	columnWeight      = "weight"
)

var columnNames = []string{columnLine, columnID, columnLossDate, columnStatus, columnTerms, columnPaid, columnOutstanding,
	columnDeductible, columnLimit, columnBusiness, columnSegment, columnWeight}

// chunkRows is the number of rows in every chunk but the last.
const chunkRows = 1 << 16

// columnBuilder collects rows into chunks.
type columnBuilder struct {
	decimals int8
	rows     int
	chunk    int
	data     map[string]*[]byte
	lastLine int64
	lastID   string
	business dictionary
	segment  dictionary
	weighted bool
	packer   *flate.Writer
}

// dictionary numbers the texts of one chunk in order of appearance.
type dictionary struct {
	codes map[string]uint64
	texts []string
}

func (d *dictionary) code(text string) uint64 {
	if code, ok := d.codes[text]; ok {
		return code
	}
	if d.codes == nil {
		d.codes = map[string]uint64{}
	}
	code := uint64(len(d.texts))
	d.codes[text] = code
	d.texts = append(d.texts, text)
	return code
}

func newColumnBuilder(decimals int8) *columnBuilder {
	b := &columnBuilder{decimals: decimals, data: map[string]*[]byte{}}
	for _, name := range columnNames {
		b.data[name] = new([]byte)
	}
	return b
}

func (b *columnBuilder) add(c *claims.Claim) {
	put := func(name string, v int64) { d := b.data[name]; *d = binary.AppendVarint(*d, v) }
	code := func(name string, v uint64) { d := b.data[name]; *d = binary.AppendUvarint(*d, v) }
	optional := func(name string, has bool, a claims.Amount) {
		if !has {
			code(name, 0)
			return
		}
		units, _ := a.MinorUnits(int(b.decimals))
		code(name, 1+uint64(units)<<1^uint64(units>>63))
	}
	put(columnLine, int64(c.Line)-b.lastLine)
	b.lastLine = int64(c.Line)
	shared := 0
	for shared < min(len(c.ID), len(b.lastID)) && c.ID[shared] == b.lastID[shared] {
		shared++
	}
	code(columnID, uint64(shared))
	code(columnID, uint64(len(c.ID)-shared))
	*b.data[columnID] = append(*b.data[columnID], c.ID[shared:]...)
	b.lastID = c.ID
	code(columnLossDate, uint64(c.LossDate))
	*b.data[columnStatus] = append(*b.data[columnStatus], byte(c.Status))
	*b.data[columnTerms] = append(*b.data[columnTerms], byte(claims.PackTerms(c.DeductibleType, c.LimitReached)))
	paid, _ := c.Paid.MinorUnits(int(b.decimals)) // whole: the row was accepted
	outstanding, _ := c.Outstanding.MinorUnits(int(b.decimals))
	put(columnPaid, paid)
	put(columnOutstanding, outstanding)
	optional(columnDeductible, c.HasDeductible, c.Deductible)
	optional(columnLimit, c.HasLimit, c.Limit)
	code(columnBusiness, b.business.code(c.Business))
	code(columnSegment, b.segment.code(c.Segment))
	*b.data[columnWeight] = binary.LittleEndian.AppendUint64(*b.data[columnWeight], math.Float64bits(c.Weight))
	b.weighted = b.weighted || c.Weight != 1
	b.rows++
}

// flush writes a full chunk, or at the end what is left.
func (b *columnBuilder) flush(ctx context.Context, tx *sql.Tx, batch BatchID, end bool) error {
	if b.rows < chunkRows && !end || b.rows == 0 {
		return nil
	}
	if !b.weighted {
		*b.data[columnWeight] = nil // no data: all weights are 1
	}
	for name, d := range map[string]*dictionary{columnBusiness: &b.business, columnSegment: &b.segment} {
		head := binary.AppendUvarint(nil, uint64(len(d.texts)))
		for _, text := range d.texts {
			head = binary.AppendUvarint(head, uint64(len(text)))
			head = append(head, text...)
		}
		*b.data[name] = append(head, *b.data[name]...)
		*d = dictionary{}
	}
	for _, name := range columnNames {
		packed, err := b.pack(*b.data[name])
		if err != nil {
			return err
		}
		if _, err := tx.ExecContext(ctx, "insert into claim_columns (batch_id, name, chunk, rows, data) values (?1, ?2, ?3, ?4, ?5)",
			batch, name, b.chunk, b.rows, packed); err != nil {
			return err
		}
		*b.data[name] = (*b.data[name])[:0]
	}
	b.chunk++
	b.rows, b.lastLine, b.lastID, b.weighted = 0, 0, "", false
	return nil
}

func (b *columnBuilder) pack(data []byte) ([]byte, error) {
	var out bytes.Buffer
	if b.packer == nil {
		b.packer, _ = flate.NewWriter(&out, flate.BestSpeed) // the level is a constant in range
	} else {
		b.packer.Reset(&out)
	}
	if _, err := b.packer.Write(data); err != nil {
		return nil, err
	}
	err := b.packer.Close()
	return out.Bytes(), err
}

// chunkReader reads the integers and texts of one unpacked chunk.
type chunkReader struct {
	data []byte
	err  error
}

var errChunk = errors.New("a column chunk is cut short")

func unpack(packed []byte) (*chunkReader, error) {
	in := flate.NewReader(bytes.NewReader(packed))
	defer in.Close()
	data, err := io.ReadAll(in)
	if err != nil {
		return nil, fmt.Errorf("%w: %w", errChunk, err)
	}
	return &chunkReader{data: data}, nil
}

func (c *chunkReader) int() int64 {
	v, n := binary.Varint(c.data)
	if n <= 0 {
		c.err = errChunk
		return 0
	}
	c.data = c.data[n:]
	return v
}

func (c *chunkReader) uint() uint64 {
	if len(c.data) > 0 && c.data[0] < 0x80 {
		v := uint64(c.data[0])
		c.data = c.data[1:]
		return v
	}
	v, n := binary.Uvarint(c.data)
	if n <= 0 {
		c.err = errChunk
		return 0
	}
	c.data = c.data[n:]
	return v
}

// optional reads what may be absent.
func (c *chunkReader) optional() int64 {
	v := c.uint()
	if v == 0 {
		return claims.NoTerm
	}
	v--
	return int64(v>>1) ^ -int64(v&1)
}

func (c *chunkReader) bytes(n uint64) []byte {
	if n > uint64(len(c.data)) {
		c.err = errChunk
		return nil
	}
	b := c.data[:n]
	c.data = c.data[n:]
	return b
}
