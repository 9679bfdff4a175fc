//go:build !cgo

package main

const haveCgo = false
