// Package migrations holds the schema of the database, one numbered file a
// step, forward only. An applied file never changes.
package migrations

import "embed"

// SQLite holds the steps for SQLite in the folder sqlite.
//
//go:embed sqlite/*.sql
var SQLite embed.FS
