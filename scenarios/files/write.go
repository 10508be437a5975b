package files

import (
	"bufio"
	"errors"
	"fmt"
	"os"
	"path/filepath"

	"codeassay/scenarios"
)

// Source is what can be written: a scenarios.Recording or a generator.
type Source interface {
	Streams() []scenarios.Stream
	Dt() float64
	Trials() []scenarios.Trial
	Units() []scenarios.Unit
	Train(dst []int64, unit, trial int) []int64
	Labels(unit, trial int) []scenarios.EventLabel
	StreamSamples(stream, trial int) []float64
}

// pending is a file being written under another name, which takes its own name
// only when it is complete.
type pending struct {
	path, part string
	file       *os.File
	*bufio.Writer
}

func create(path string) (*pending, error) {
	part := filepath.Join(filepath.Dir(path), fmt.Sprintf(".%s.part%d", filepath.Base(path), os.Getpid()))
	file, err := os.Create(part)
	if err != nil {
		return nil, err
	}
	return &pending{path: path, part: part, file: file, Writer: bufio.NewWriterSize(file, 1<<20)}, nil
}

// finish completes the content.
func (p *pending) finish() error { return errors.Join(p.Flush(), p.file.Close()) }

func (p *pending) rename() error { return os.Rename(p.part, p.path) }

// discard removes what is left of a file that was not renamed.
func (p *pending) discard() {
	p.file.Close()
	os.Remove(p.part)
}

// writeAll writes several files, and names them only when all are complete.
func writeAll(paths []string, write []func(*pending) error) error {
	var all []*pending
	defer func() {
		for _, p := range all {
			p.discard()
		}
	}()
	for i, path := range paths {
		p, err := create(path)
		if err != nil {
			return err
		}
		all = append(all, p)
		if err := errors.Join(write[i](p), p.finish()); err != nil {
			return fmt.Errorf("%s: %w", path, err)
		}
	}
	for _, p := range all {
		if err := p.rename(); err != nil {
			return err
		}
	}
	return nil
}

// withTrials says whether the trials have to be written at all.
func withTrials(src Source) bool {
	trials := src.Trials()
	return len(trials) > 1 || trials[0].Number != 0
}

// withLabels says whether the spikes carry labels.
func withLabels(src Source) bool {
	for u := range src.Units() {
		for t := range src.Trials() {
			if src.Labels(u, t) != nil {
				return true
			}
		}
	}
	return false
}
