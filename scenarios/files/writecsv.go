package files

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"codeassay/scenarios"
)

var labelNames = [...]string{scenarios.FirstSpike: "first", scenarios.InnerSpike: "inner", scenarios.SingleSpike: "single"}

// WriteCSV writes spikes.csv and streams.csv into a folder, which it makes where
// there is none, and units.csv if a unit has a type, a condition or limits of its
// own. Times are exact to the nanosecond, other numbers in the shortest form that
// reads back to the same bits. Nothing half-written is left behind: the files get
// their names when all are complete. The formats have no place for silent units
// (declare them by number on reading), a stream's band and its unit of measure.
func WriteCSV(dir string, src Source) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	paths := []string{filepath.Join(dir, "spikes.csv"), filepath.Join(dir, "streams.csv")}
	write := []func(*pending) error{
		func(p *pending) error { return writeSpikes(p, src) },
		func(p *pending) error { return writeStreams(p, src) },
	}
	if slices.ContainsFunc(src.Units(), func(u scenarios.Unit) bool { return u != scenarios.NewUnit(u.Name) }) {
		paths = append(paths, filepath.Join(dir, "units.csv"))
		write = append(write, func(p *pending) error { return writeUnits(p, src.Units()) })
	}
	return writeAll(paths, write)
}

func writeSpikes(p *pending, src Source) error {
	trials, labels := withTrials(src), withLabels(src)
	line := []byte("unit,time_s")
	if trials {
		line = append(line, ",trial"...)
	}
	if labels {
		line = append(line, ",event"...)
	}
	p.Write(append(line, '\n'))
	var train []int64
	for u, unit := range src.Units() {
		name, err := quote(unit.Name)
		if err != nil {
			return err
		}
		for t, trial := range src.Trials() {
			train = src.Train(train[:0], u, t)
			var events []scenarios.EventLabel
			if labels {
				events = src.Labels(u, t)
			}
			for i, ns := range train {
				line = append(append(line[:0], name...), ',')
				line = appendSeconds(line, ns)
				if trials {
					line = strconv.AppendInt(append(line, ','), trial.Number, 10)
				}
				if labels {
					line = append(append(line, ','), labelNames[events[i]]...)
				}
				if _, err := p.Write(append(line, '\n')); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

func writeStreams(p *pending, src Source) error {
	line := []byte("time_s")
	for _, s := range src.Streams() {
		if s.Name == "time_s" || s.Name == "trial" {
			return fmt.Errorf("a stream cannot be named %q here: rename it", s.Name)
		}
		name, err := quote(s.Name)
		if err != nil {
			return err
		}
		line = append(append(line, ','), name...)
	}
	trials := withTrials(src)
	if trials {
		line = append(line, ",trial"...)
	}
	p.Write(append(line, '\n'))
	step := scenarios.Nanoseconds(src.Dt())
	whole := scenarios.Seconds(step) == src.Dt()
	samples := make([][]float64, len(src.Streams()))
	for t, trial := range src.Trials() {
		for s := range samples {
			samples[s] = src.StreamSamples(s, t)
		}
		for i := range trial.Samples {
			if whole {
				line = appendSeconds(line[:0], int64(i)*step)
			} else {
				line = strconv.AppendFloat(line[:0], float64(i)*src.Dt(), 'g', -1, 64)
			}
			for _, x := range samples {
				line = strconv.AppendFloat(append(line, ','), x[i], 'g', -1, 64)
			}
			if trials {
				line = strconv.AppendInt(append(line, ','), trial.Number, 10)
			}
			if _, err := p.Write(append(line, '\n')); err != nil {
				return err
			}
		}
	}
	return nil
}

func writeUnits(p *pending, units []scenarios.Unit) error {
	fmt.Fprintln(p, strings.Join(unitColumns, ","))
	for _, u := range units {
		var row []string
		for _, text := range []string{u.Name, u.CellType, u.Condition} {
			quoted, err := quote(text)
			if err != nil {
				return err
			}
			row = append(row, quoted)
		}
		var limits []string
		for _, ns := range []int64{u.MaxISI, u.FirstISI, u.MinSilence} {
			if ns < 0 {
				limits = append(limits, "")
				continue
			}
			limits = append(limits, strconv.FormatFloat(float64(ns)/1e6, 'g', -1, 64))
		}
		if _, err := fmt.Fprintln(p, strings.Join(slices.Insert(row, 1, limits...), ",")); err != nil {
			return err
		}
	}
	return nil
}

// quote writes a name as a field.
func quote(name string) (string, error) {
	if strings.ContainsAny(name, "\n\r") {
		return "", fmt.Errorf("the name %q holds a line end: rename it", name)
	}
	if !strings.ContainsAny(name, "\",") && name == strings.TrimFunc(name, func(r rune) bool { return r == ' ' || r == '\t' }) {
		return name, nil
	}
	return `"` + strings.ReplaceAll(name, `"`, `""`) + `"`, nil
}

// appendSeconds writes nanoseconds ≥ 0 exactly, without trailing zeros.
func appendSeconds(dst []byte, ns int64) []byte {
	dst = strconv.AppendInt(dst, ns/1e9, 10)
	fraction := ns % 1e9
	if fraction == 0 {
		return dst
	}
	dst = append(dst, '.')
	at := len(dst)
	dst = strconv.AppendInt(dst, fraction+1e9, 10) // a leading 1 keeps the zeros
	copy(dst[at:], dst[at+1:])
	dst = dst[:len(dst)-1]
	for dst[len(dst)-1] == '0' {
		dst = dst[:len(dst)-1]
	}
	return dst
}
