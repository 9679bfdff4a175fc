package storage

import (
	"context"
	"database/sql"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"spillway/severity/claims"
	"spillway/severity/study"
)

func TestForeignNewerAndDamagedFilesAreRefused(t *testing.T) {
	ctx := context.Background()
	folder := t.TempDir()
	execute := func(name string, statements ...string) string {
		t.Helper()
		path := filepath.Join(folder, name)
		db, err := sql.Open("sqlite3", path)
		if err != nil {
			t.Fatal(err)
		}
		defer db.Close()
		for _, statement := range statements {
			if _, err := db.Exec(statement); err != nil {
				t.Fatal(err)
			}
		}
		return path
	}
	foreign := execute("foreign.db", "create table other (x)")
	marked := execute("marked.db", "pragma application_id = 42", "create table other (x)")

	newer := filepath.Join(folder, "newer.db")
	s, err := Open(ctx, newer, clock)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := s.writer.Exec("insert into goose_db_version (version_id, is_applied) values (99999, 1)"); err != nil {
		t.Fatal(err)
	}
	if err := s.Close(); err != nil {
		t.Fatal(err)
	}
	damaged := filepath.Join(folder, "damaged.db")
	if err := os.WriteFile(damaged, []byte(strings.Repeat("no database at all ", 300)), 0o600); err != nil {
		t.Fatal(err)
	}
	for path, want := range map[string]error{foreign: ErrForeignFile, marked: ErrForeignFile, newer: ErrNewerFile, damaged: ErrDamaged} {
		before, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if s, err := Open(ctx, path, clock); !errors.Is(err, want) {
			t.Errorf("%s: %v, want %v", filepath.Base(path), err, want)
			if err == nil {
				s.Close()
			}
		}
		after, err := os.ReadFile(path)
		if err != nil || (path != newer && string(before) != string(after)) {
			t.Errorf("%s was changed by being refused (%v)", filepath.Base(path), err)
		}
	}
}

func TestSeveralStartsAtOnce(t *testing.T) {
	path := filepath.Join(t.TempDir(), "shared.db")
	var wait sync.WaitGroup
	stores, errs := make([]*Store, 4), make([]error, 4)
	for i := range stores {
		wait.Go(func() { stores[i], errs[i] = Open(context.Background(), path, clock) })
	}
	wait.Wait()
	for i, err := range errs {
		if err != nil {
			t.Fatal(err)
		}
		defer stores[i].Close()
	}
	// What one writes the others read.
	id := accept(t, stores[0], quarter(50, 0), "harbour", day(t, "2026-03-31"))
	if b, err := stores[3].Batch(context.Background(), id); err != nil || b.Accepted != 50 {
		t.Errorf("%+v, %v", b, err)
	}
}

func TestWhatIsStoredStays(t *testing.T) {
	s := openTest(t)
	accept(t, s, quarter(20, 0)+"C00001,2025-01-01,open,cargo,north,bad,0,0,1\n", "harbour", day(t, "2026-03-31"))
	id := newStudy(t, s)
	if _, err := s.AddRevision(context.Background(), id, 0, revision(t, s)); err != nil {
		t.Fatal(err)
	}
	for _, statement := range []string{
		"update claims set paid = 0", "delete from claims", "update batches set name = 'x'", "delete from batches",
		"update rejected_rows set line = 0", "delete from rejected_rows", "update revisions set note = 'x'", "delete from revisions",
		"insert into claims select 99, line, claim_id, loss_date, report_date, close_date, status, business, segment, paid, outstanding, deductible, limit_amount, limit_reached, deductible_type, weight from claims",
		"insert into revisions select study_id, 0, assumptions, results, summary, program_version, author, note, created_at from revisions",
	} {
		if _, err := s.writer.Exec(statement); err == nil {
			t.Errorf("%.60s ... went through", statement)
		}
	}
}

func TestReadersDoNotWaitForAWriter(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	accept(t, s, quarter(20, 0), "harbour", day(t, "2026-03-31"))
	tx, err := s.writer.BeginTx(ctx, nil)
	if err != nil {
		t.Fatal(err)
	}
	defer tx.Rollback()
	if _, err := tx.Exec("insert into studies (name, purpose, created_at) values ('open', '', '')"); err != nil {
		t.Fatal(err)
	}
	batches, err := s.Batches(ctx)
	if err != nil || len(batches) != 1 {
		t.Errorf("%v, %v", batches, err)
	}
	if studies, err := s.Studies(ctx); err != nil || len(studies) != 0 {
		t.Errorf("what is not committed is seen: %v, %v", studies, err)
	}
	if _, err := s.reader.Exec("insert into studies (name, purpose, created_at) values ('x', '', '')"); err == nil {
		t.Error("a reader wrote")
	}
}

func TestSameFileTwice(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	id := accept(t, s, quarter(20, 0), "harbour", day(t, "2026-03-31"))
	var duplicate *DuplicateBatch
	if _, err := s.CreateUpload(ctx, "again.csv", "elsewhere", strings.NewReader(quarter(20, 0)), 1<<20); !errors.As(err, &duplicate) || duplicate.Existing != id {
		t.Errorf("%v, want the batch %d", err, id)
	}
	if _, err := s.CreateUpload(ctx, "large.csv", "harbour", strings.NewReader(quarter(20, 9)), 100); !errors.Is(err, ErrTooLarge) {
		t.Errorf("%v, want too large", err)
	}
	entries, err := os.ReadDir(s.files)
	if err != nil || len(entries) != 1 {
		t.Errorf("%d files are kept, want 1 (%v)", len(entries), err)
	}
}

func TestAFailedAcceptanceStoresNothing(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	u, err := s.CreateUpload(ctx, "bad.csv", "harbour", strings.NewReader("claim_id,loss_date,status,line,segment,paid,outstanding,deductible,limit\nA1,2025-01-01,open,cargo,north,100,0,0,500\nA2,\"2025"), 1<<20)
	if err != nil {
		t.Fatal(err)
	}
	if err := s.SavePlan(ctx, u.ID, quarterPlan); err != nil {
		t.Fatal(err)
	}
	if _, err := s.Accept(ctx, u.ID, "bad", nil); err == nil || !strings.Contains(err.Error(), "line 3") {
		t.Errorf("an open quote on line 3: %v", err)
	}
	var n int
	if err := s.reader.QueryRow("select (select count(*) from claims) + (select count(*) from batches)").Scan(&n); err != nil || n != 0 {
		t.Errorf("%d rows are left behind (%v)", n, err)
	}
	if u, err := s.Upload(ctx, u.ID); err != nil || u.State != "open" {
		t.Errorf("the upload is gone: %+v, %v", u, err)
	}
	if err := s.DiscardUpload(ctx, u.ID); err != nil {
		t.Error(err)
	}
	if err := s.SavePlan(ctx, u.ID, quarterPlan); !errors.Is(err, ErrClosed) {
		t.Errorf("%v, want closed", err)
	}
}

func TestMixedCurrenciesAreRefused(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	first := accept(t, s, quarter(20, 0), "harbour", day(t, "2026-03-31"))
	u, err := s.CreateUpload(ctx, "usd.csv", "harbour", strings.NewReader(quarter(30, 1)), 1<<20)
	if err != nil {
		t.Fatal(err)
	}
	plan := quarterPlan
	plan.Basis.Currency = "USD"
	if err := s.SavePlan(ctx, u.ID, plan); err != nil {
		t.Fatal(err)
	}
	second, err := s.Accept(ctx, u.ID, "dollars", nil)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := s.Book(ctx, []BatchID{first, second}); !errors.Is(err, ErrMixedCurrencies) {
		t.Errorf("%v, want mixed currencies", err)
	}
	if _, err := s.Book(ctx, []BatchID{77}); !errors.Is(err, ErrNotFound) {
		t.Errorf("%v, want not found", err)
	}
}

func newStudy(t *testing.T, s *Store) StudyID {
	t.Helper()
	id, err := s.CreateStudy(context.Background(), "study", "purpose")
	if err != nil {
		t.Fatal(err)
	}
	return id
}

func revision(t *testing.T, s *Store) Revision {
	t.Helper()
	ctx := context.Background()
	batches, err := s.Batches(ctx)
	if err != nil || len(batches) == 0 {
		t.Fatal(batches, err)
	}
	book, err := s.Book(ctx, []BatchID{batches[0].ID})
	if err != nil {
		t.Fatal(err)
	}
	r, err := study.Run(book, study.Default([]study.BatchRef{{ID: int64(batches[0].ID), Name: batches[0].Name, Digest: batches[0].SHA256}}, book.Largest(claims.IncurredAmount)))
	if err != nil {
		t.Fatal(err)
	}
	return Revision{Assumptions: r.Assumptions, Results: r, ProgramVersion: "test", Author: "an analyst", Note: "first"}
}

func TestRevisionsComeOneAfterTheOther(t *testing.T) {
	s := openTest(t)
	ctx := context.Background()
	accept(t, s, quarter(400, 0), "harbour", day(t, "2026-03-31"))
	id, r := newStudy(t, s), revision(t, s)
	if n, err := s.AddRevision(ctx, id, 0, r); err != nil || n != 1 {
		t.Fatal(n, err)
	}
	var conflict *Conflict
	if _, err := s.AddRevision(ctx, id, 0, r); !errors.As(err, &conflict) || conflict.Latest != 1 {
		t.Errorf("%v, want a conflict with revision 1", err)
	}
	if _, err := s.AddRevision(ctx, 99, 0, r); !errors.Is(err, ErrNotFound) {
		t.Errorf("%v, want not found", err)
	}
	got, err := s.Revision(ctx, id, 1)
	if err != nil {
		t.Fatal(err)
	}
	// Stored results read back to the last bit.
	stored, err := got.Results.Encode()
	if err != nil {
		t.Fatal(err)
	}
	original, err := r.Results.Encode()
	if err != nil || string(stored) != string(original) {
		t.Errorf("the results differ after storing (%v)", err)
	}
	if len(study.Changes(got.Assumptions, r.Assumptions)) != 0 || got.Author != "an analyst" || got.Created != "2026-01-31T09:30:00Z" {
		t.Errorf("%+v", got)
	}
	list, err := s.Revisions(ctx, id)
	if err != nil || len(list) != 1 || list[0].Headline.Claims == 0 {
		t.Errorf("%+v, %v", list, err)
	}
}
