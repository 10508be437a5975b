package bench

import (
	"errors"
	"fmt"
	"regexp"
	"strings"
)

// Fault is something wrong with a study: one line that names the file, the line
// and the key, and says what would be right.
type Fault struct {
	File string // "" for a study made in the program or by flags
	Line int    // 0 where no line is to blame
	Text string
	// Remedy, where not empty, may take more lines.
	Remedy string
}

func (f *Fault) Error() string {
	switch {
	case f.File == "":
		return f.Text
	case f.Line == 0:
		return f.File + ": " + f.Text
	}
	return fmt.Sprintf("%s:%d: %s", f.File, f.Line, f.Text)
}

// Fault blames a key of the study, by its path in dots ("sweep.draws",
// "code.0.weights"), with the line where the file gives it, or else its table.
func (s *Study) Fault(path, format string, args ...any) *Fault {
	f := &Fault{File: s.file, Text: fmt.Sprintf(format, args...)}
	for at := path; at != "" && f.Line == 0; {
		f.Line = s.lines[at]
		dot := strings.LastIndexByte(at, '.')
		at = at[:max(dot, 0)]
	}
	return f
}

// Given reports whether the file gives the key, by its path in dots.
func (s *Study) Given(path string) bool { return s.lines[path] > 0 }

var keyFirst = regexp.MustCompile(`^\[(\w+)\] (\w+)`)

// Locate adds file and line to an error that begins with a key of the study, as
// in "[sweep] cells = …", and leaves others as they are.
func (s *Study) Locate(err error) error {
	var fault *Fault
	if err == nil || errors.As(err, &fault) {
		return err
	}
	if m := keyFirst.FindStringSubmatch(err.Error()); m != nil && s.Given(m[1]+"."+m[2]) {
		return s.Fault(m[1]+"."+m[2], "%s", err)
	}
	return err
}
