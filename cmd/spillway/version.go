package main

import (
	"fmt"
	"runtime/debug"
)

type versionCommand struct{}

func (versionCommand) Run(io *streams) error {
	_, err := fmt.Fprintf(io.out, "spillway %s\n", version())
	return err
}

// release is the number of this version of the program.
const release = "0.1.0"

// version is the release and, where the build knows it, the revision that the
// program was built from, marked when files had been changed since.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return release
	}
	revision, changed := "", ""
	for _, setting := range info.Settings {
		switch setting.Key {
		case "vcs.revision":
			revision = "+" + setting.Value[:min(len(setting.Value), 12)]
		case "vcs.modified":
			if setting.Value == "true" {
				changed = ".changed"
			}
		}
	}
	if revision == "" {
		return release
	}
	return release + revision + changed
}
