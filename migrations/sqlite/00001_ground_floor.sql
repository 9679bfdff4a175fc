-- +goose Up

-- A source is where extracts come from; its last accepted plan is remembered.
create table sources (
  id         integer primary key,
  name       text not null unique check (length(name) between 1 and 200),
  plan       text check (json_valid(plan)),
  created_at text not null
) strict;

-- An upload is a file as it came, on its way to a batch.
create table uploads (
  id         integer primary key,
  source_id  integer not null references sources,
  file_name  text not null,
  sha256     text not null check (length(sha256) = 64),
  bytes      integer not null check (bytes >= 0),
  plan       text check (json_valid(plan)),
  report     text check (json_valid(report)), -- of the check under this plan
  state      text not null default 'open' check (state in ('open', 'accepted', 'discarded')),
  created_at text not null
) strict;
create index uploads_by_source on uploads (source_id);

-- A batch is an accepted upload. Dates are written 20250630; 0 is none.
create table batches (
  id               integer primary key,
  upload_id        integer not null unique references uploads,
  source_id        integer not null references sources,
  name             text not null check (length(name) between 1 and 200),
  file_name        text not null,
  sha256           text not null unique check (length(sha256) = 64),
  bytes            integer not null,
  plan             text not null check (json_valid(plan)), -- format, columns, basis
  report           text not null check (json_valid(report)),
  header           text not null check (json_valid(header)),
  currency         text not null,
  decimals         integer not null check (decimals between 0 and 4),
  valuation        integer not null,
  rows_read        integer not null,
  rows_accepted    integer not null,
  rows_rejected    integer not null,
  later_valuations integer not null, -- claims that an earlier batch of the source values too
  accepted_at      text not null,
  check (rows_read = rows_accepted + rows_rejected)
) strict;
create index batches_by_source on batches (source_id);

-- A claim as its extract states it: amounts in minor units on the batch's own
-- basis, null for a deductible or limit that is not stated.
create table claims (
  batch_id        integer not null references batches,
  line            integer not null check (line > 0),
  claim_id        text not null,
  loss_date       integer not null,
  report_date     integer not null,
  close_date      integer not null,
  status          integer not null check (status between 0 and 4),
  business        text not null,
  segment         text not null,
  paid            integer not null,
  outstanding     integer not null,
  deductible      integer,
  limit_amount    integer,
  limit_reached   integer not null check (limit_reached between 0 and 2),
  deductible_type integer not null check (deductible_type between 0 and 1),
  weight          real not null check (weight > 0),
  primary key (batch_id, line)
) strict, without rowid;
create unique index claims_by_id on claims (claim_id, batch_id);

-- The columns that a study needs, compressed: derived from claims, and made
-- again from them when missing.
create table claim_columns (
  batch_id integer not null references batches,
  name     text not null,
  chunk    integer not null,
  rows     integer not null,
  data     blob not null,
  primary key (batch_id, name, chunk)
) strict, without rowid;

-- A row that was not accepted, as it came, with the reasons.
create table rejected_rows (
  batch_id integer not null references batches,
  line     integer not null,
  cells    text not null check (json_valid(cells)),
  findings text not null check (json_valid(findings)),
  primary key (batch_id, line)
) strict, without rowid;

create table studies (
  id         integer primary key,
  name       text not null check (length(name) between 1 and 200),
  purpose    text not null,
  created_at text not null
) strict;

create table revisions (
  study_id        integer not null references studies,
  number          integer not null check (number > 0),
  assumptions     text not null check (json_valid(assumptions)),
  results         blob not null,
  summary         text not null check (json_valid(summary)), -- what lists show
  program_version text not null,
  author          text not null,
  note            text not null,
  created_at      text not null,
  primary key (study_id, number)
) strict, without rowid;

create table revision_batches (
  study_id integer not null,
  number   integer not null,
  batch_id integer not null references batches,
  primary key (study_id, number, batch_id),
  foreign key (study_id, number) references revisions
) strict, without rowid;

-- What was accepted or recorded does not change.
-- +goose StatementBegin
create trigger batches_stay before update on batches begin select raise(abort, 'a batch does not change'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger claims_stay before update on claims begin select raise(abort, 'a claim does not change'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger claims_remain before delete on claims begin select raise(abort, 'a claim is not deleted'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger batches_remain before delete on batches begin select raise(abort, 'a batch is not deleted'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger rejected_rows_stay before update on rejected_rows begin select raise(abort, 'a rejected row does not change'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger rejected_rows_remain before delete on rejected_rows begin select raise(abort, 'a rejected row is not deleted'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger revisions_stay before update on revisions begin select raise(abort, 'a revision does not change'); end;
-- +goose StatementEnd
-- +goose StatementBegin
create trigger revisions_remain before delete on revisions begin select raise(abort, 'a revision is not deleted'); end;
-- +goose StatementEnd
