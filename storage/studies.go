package storage

import (
	"context"
	"database/sql"
	"encoding/json"
	"fmt"

	"spillway/severity/study"
)

// Study is a question put to claims; its revisions are the answers.
type Study struct {
	ID       StudyID
	Name     string
	Purpose  string
	Created  string
	Latest   int // number of the latest revision, 0 without one
	Changed  string
	Headline Headline // of the latest revision
}

// Headline is what lists show of a revision.
type Headline struct {
	Model    string  `json:"model"`
	Status   string  `json:"status"` // severity.Status
	Claims   int     `json:"claims"`
	Currency string  `json:"currency"`
	Mean     float64 `json:"mean"` // 0 without a fit
	Shape    float64 `json:"shape"`
}

// Revision is one set of assumptions with its results. It never changes.
type Revision struct {
	Study          StudyID
	Number         int
	Assumptions    study.Assumptions
	Results        *study.Results // nil in lists
	Headline       Headline
	ProgramVersion string
	Author         string
	Note           string
	Created        string
}

// CreateStudy makes a study without a revision.
func (s *Store) CreateStudy(ctx context.Context, name, purpose string) (StudyID, error) {
	var id int64
	err := s.inTransaction(ctx, func(tx *sql.Tx) error {
		result, err := tx.ExecContext(ctx, "insert into studies (name, purpose, created_at) values (?1, ?2, ?3)", name, purpose, s.timestamp())
		if err != nil {
			return plain(err)
		}
		id, err = result.LastInsertId()
		return err
	})
	if err != nil {
		return 0, fmt.Errorf("study %q: %w", name, err)
	}
	return StudyID(id), nil
}

const selectStudies = `select s.id, s.name, s.purpose, s.created_at, coalesce(r.number, 0), coalesce(r.created_at, ''), coalesce(r.summary, '{}')
	from studies s left join revisions r on r.study_id = s.id and r.number = (select max(number) from revisions where study_id = s.id)`

func scanStudy(scan func(...any) error) (Study, error) {
	var st Study
	var headline string
	if err := scan(&st.ID, &st.Name, &st.Purpose, &st.Created, &st.Latest, &st.Changed, &headline); err != nil {
		return st, err
	}
	return st, json.Unmarshal([]byte(headline), &st.Headline)
}

// Studies lists all studies, the one changed last first.
func (s *Store) Studies(ctx context.Context) ([]Study, error) {
	rows, err := s.reader.QueryContext(ctx, selectStudies+" order by coalesce(r.created_at, s.created_at) desc, s.id desc")
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var list []Study
	for rows.Next() {
		st, err := scanStudy(rows.Scan)
		if err != nil {
			return nil, plain(err)
		}
		list = append(list, st)
	}
	return list, plain(rows.Err())
}

// Study returns one study, or ErrNotFound.
func (s *Store) Study(ctx context.Context, id StudyID) (*Study, error) {
	st, err := scanStudy(s.reader.QueryRowContext(ctx, selectStudies+" where s.id = ?1", id).Scan)
	if err := lookedUp(err, "study", int64(id)); err != nil {
		return nil, err
	}
	return &st, nil
}

// AddRevision records a revision after the one that its author saw last, 0
// for the first. A *Conflict says that there is a newer one; nothing is
// recorded then. The revision's Number and Created are set here.
func (s *Store) AddRevision(ctx context.Context, id StudyID, seen int, r Revision) (int, error) {
	assumptions, err := json.Marshal(r.Assumptions)
	if err != nil {
		return 0, fmt.Errorf("study %d: assumptions: %w", id, err)
	}
	headline, err := json.Marshal(headlineOf(r.Results))
	if err != nil {
		return 0, fmt.Errorf("study %d: %w", id, err)
	}
	results, err := r.Results.Encode()
	if err != nil {
		return 0, fmt.Errorf("study %d: %w", id, err)
	}
	err = s.inTransaction(ctx, func(tx *sql.Tx) error {
		var exists, latest int
		err := tx.QueryRowContext(ctx, "select (select count(*) from studies where id = ?1), (select coalesce(max(number), 0) from revisions where study_id = ?1)", id).Scan(&exists, &latest)
		switch {
		case err != nil:
			return plain(err)
		case exists == 0:
			return ErrNotFound
		case latest != seen:
			return &Conflict{latest}
		}
		_, err = tx.ExecContext(ctx, `insert into revisions (study_id, number, assumptions, results, summary, program_version, author, note, created_at)
			values (?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8, ?9)`,
			id, seen+1, string(assumptions), results, string(headline), r.ProgramVersion, r.Author, r.Note, s.timestamp())
		if err != nil {
			return plain(err)
		}
		for _, b := range r.Assumptions.Batches {
			if _, err := tx.ExecContext(ctx, "insert into revision_batches (study_id, number, batch_id) values (?1, ?2, ?3)", id, seen+1, b.ID); err != nil {
				return plain(err)
			}
		}
		return nil
	})
	if err != nil {
		return 0, fmt.Errorf("study %d: %w", id, err)
	}
	return seen + 1, nil
}

func headlineOf(r *study.Results) Headline {
	h := Headline{Model: r.Assumptions.Model, Claims: r.Sample.Claims, Currency: r.Currency}
	if r.Fit != nil {
		h.Status, h.Mean, h.Shape = "converged", r.Fit.Mean.Value, r.Fit.Parameters[0].Value
	} else if r.NoFit != nil {
		h.Status = string(r.NoFit.Status)
	}
	return h
}

// Revision returns one revision with its results, or ErrNotFound.
func (s *Store) Revision(ctx context.Context, id StudyID, number int) (*Revision, error) {
	r := &Revision{Study: id, Number: number}
	var assumptions, headline string
	var results []byte
	err := s.reader.QueryRowContext(ctx, `select assumptions, results, summary, program_version, author, note, created_at
		from revisions where study_id = ?1 and number = ?2`, id, number).
		Scan(&assumptions, &results, &headline, &r.ProgramVersion, &r.Author, &r.Note, &r.Created)
	if err := lookedUp(err, fmt.Sprintf("study %d, revision", id), int64(number)); err != nil {
		return nil, err
	}
	if err := r.parse(assumptions, headline); err != nil {
		return nil, err
	}
	r.Results, err = study.DecodeResults(results)
	if err != nil {
		return nil, fmt.Errorf("study %d, revision %d: %w", id, number, err)
	}
	return r, nil
}

// Revisions lists the revisions of a study without their results, the latest
// first.
func (s *Store) Revisions(ctx context.Context, id StudyID) ([]Revision, error) {
	rows, err := s.reader.QueryContext(ctx, `select number, assumptions, summary, program_version, author, note, created_at
		from revisions where study_id = ?1 order by number desc`, id)
	if err != nil {
		return nil, plain(err)
	}
	defer rows.Close()
	var list []Revision
	for rows.Next() {
		r := Revision{Study: id}
		var assumptions, headline string
		if err := rows.Scan(&r.Number, &assumptions, &headline, &r.ProgramVersion, &r.Author, &r.Note, &r.Created); err != nil {
			return nil, plain(err)
		}
		if err := r.parse(assumptions, headline); err != nil {
			return nil, err
		}
		list = append(list, r)
	}
	return list, plain(rows.Err())
}

func (r *Revision) parse(assumptions, headline string) error {
	if err := json.Unmarshal([]byte(assumptions), &r.Assumptions); err != nil {
		return fmt.Errorf("study %d, revision %d: assumptions: %w", r.Study, r.Number, err)
	}
	if err := json.Unmarshal([]byte(headline), &r.Headline); err != nil {
		return fmt.Errorf("study %d, revision %d: %w", r.Study, r.Number, err)
	}
	return nil
}
