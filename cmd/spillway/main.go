// Command spillway fits severity curves to claim extracts, prices layers, and
// serves the workbench in a browser.
package main

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"syscall"

	"spillway/storage/extract"

	"github.com/alecthomas/kong"
)

// commands are the words after the program's name, one file each.
type commands struct {
	Fit     fitCommand     `cmd:"" help:"Fit a severity curve to a claim extract."`
	Layers  layersCommand  `cmd:"" help:"Price layers and quantiles of a given curve."`
	Check   checkCommand   `cmd:"" help:"Check a claim extract and list what was found."`
	Serve   serveCommand   `cmd:"" help:"Serve the workbench in a browser."`
	Demo    demoCommand    `cmd:"" help:"Serve the workbench with an invented book of claims in it."`
	Version versionCommand `cmd:"" help:"Print the program's version."`
}

const description = `Spillway turns a claim extract into a severity curve: every claim with its own
deductible and limit. It supports and does not replace qualified judgement.

Exit status: 0 for an answer (a stated non-existence is one), 2 for wrong usage,
1 for input that cannot be read.`

// streams are where a command reads and writes.
type streams struct {
	in  io.Reader
	out *bufio.Writer
	err io.Writer
}

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	// The first signal asks to stop, a second one ends the program at once.
	context.AfterFunc(ctx, stop)
	os.Exit(run(ctx, os.Args[1:]))
}

func run(ctx context.Context, args []string) int {
	io := &streams{in: os.Stdin, out: bufio.NewWriter(os.Stdout), err: os.Stderr}
	parser, err := kong.New(&commands{},
		kong.Name("spillway"),
		kong.Description(description),
		kong.BindTo(ctx, (*context.Context)(nil)),
		kong.Bind(io),
		kong.Vars{"fields": join(extract.Fields)},
	)
	if err != nil {
		return report(io, err)
	}
	parsed, err := parser.Parse(args)
	if err != nil {
		return report(io, usage{err})
	}
	err = parsed.Run()
	if flushed := io.out.Flush(); err == nil && flushed != nil {
		err = fmt.Errorf("standard output: %w", flushed)
	}
	return report(io, err)
}

// usage is an error in how the program was called, not in what it read.
type usage struct{ error }

func (u usage) Unwrap() error { return u.error }

func usagef(format string, args ...any) error { return usage{fmt.Errorf(format, args...)} }

// report prints an error and returns the exit status that it stands for.
func report(io *streams, err error) int {
	if err == nil {
		return 0
	}
	fmt.Fprintf(io.err, "spillway: %v\n", err)
	var wrong usage
	if errors.As(err, &wrong) {
		fmt.Fprintln(io.err, `see "spillway --help" or "spillway COMMAND --help"`)
		return 2
	}
	return 1
}
