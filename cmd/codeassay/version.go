package main

import (
	"fmt"
	"runtime"
	"runtime/debug"
)

// release is the version that results carry. The commit goes no further than
// --version, so that equal studies give equal bytes.
const release = "0.1.0-dev"

func version() string { return release }

func versionLine() string {
	commit := ""
	if info, ok := debug.ReadBuildInfo(); ok {
		changed := ""
		for _, s := range info.Settings {
			switch {
			case s.Key == "vcs.revision" && len(s.Value) >= 12:
				commit = ", commit " + s.Value[:12]
			case s.Key == "vcs.modified" && s.Value == "true":
				changed = " and changes"
			}
		}
		if commit != "" {
			commit += changed
		}
	}
	return fmt.Sprintf("codeassay %s (%s, %s/%s%s)", release, runtime.Version(), runtime.GOOS, runtime.GOARCH, commit)
}
