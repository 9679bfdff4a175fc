// Package study is the one function from claims and assumptions to results.
package study

import "spillway/severity/claims"

// Assumptions are everything a user decides in a study.
type Assumptions struct {
	Batches []BatchRef `json:"batches"`
	claims.Selection
	Model     string      `json:"model"` // "gamma"
	Layers    []LayerTerm `json:"layers"`
	Quantiles []float64   `json:"quantiles"` // each in (0, 1)
	Level     float64     `json:"level"`     // of the intervals, in (0, 1): 0.95
}

// BatchRef names a batch and the file it came from.
type BatchRef struct {
	ID     int64  `json:"id"`
	Name   string `json:"name"`
	Digest string `json:"sha256"`
}

// LayerTerm is a layer as the user wrote it; Limit 0 means unlimited.
type LayerTerm struct {
	Limit      float64 `json:"limit"`
	Attachment float64 `json:"attachment"`
}
