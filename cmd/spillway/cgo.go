//go:build cgo

package main

// haveCgo tells that the program was built with cgo, without which SQLite
// compiles and then fails at its first use.
const haveCgo = true
