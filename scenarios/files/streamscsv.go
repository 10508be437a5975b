package files

import (
	"bytes"
	"fmt"
	"math"

	"codeassay/scenarios"
)

func readStreamsCSV(path string, _ bool, spec *scenarios.Spec) error {
	t, err := openText(path)
	if err != nil {
		return err
	}
	defer t.close()
	known, err := t.find([]string{"time_s", "trial"}, 1, true)
	if err != nil {
		return err
	}
	s := streamTable{timeAt: known[0], trialAt: known[1], header: t.header}
	for i, name := range t.header {
		if i != known[0] && i != known[1] {
			s.columns = append(s.columns, i)
			spec.Streams = append(spec.Streams, scenarios.Stream{Name: name})
		}
	}
	if len(s.columns) == 0 {
		return fmt.Errorf("%s: no stream beside time_s: add a column for each signal that drove the cells", path)
	}
	s.values = make([][]float64, len(s.columns))
	if err := t.each(s.add); err != nil {
		return err
	}
	if s.samples == 0 {
		return fmt.Errorf("%s: a header but no samples", path)
	}
	for i := range spec.Streams {
		spec.Streams[i].Samples = s.values[i]
	}
	return s.timing(path, spec)
}

// streamTable gathers the columns of a table of streams.
type streamTable struct {
	header          []string
	timeAt, trialAt int
	columns         []int
	values          [][]float64
	samples         int
	clocks          []clock // of each trial, in the order of the file
	numbers         []int64
	fields          [][]byte
}

func (s *streamTable) add(row int, line []byte) (err error) {
	if s.fields, err = splitRow(s.fields[:0], line); err != nil {
		return err
	}
	if len(s.fields) != len(s.header) {
		return raggedRow(s.fields, s.header)
	}
	number := int64(0)
	if s.trialAt >= 0 {
		if number, err = parseInteger(s.fields[s.trialAt]); err != nil {
			return fmt.Errorf("trial %w", err)
		}
	}
	if last := len(s.numbers) - 1; last < 0 || s.numbers[last] != number {
		for _, earlier := range s.numbers {
			if earlier == number {
				return fmt.Errorf("trial %d goes on after another trial: sort the rows by trial and time", number)
			}
		}
		s.numbers = append(s.numbers, number)
		s.clocks = append(s.clocks, clock{firstRow: row})
	}
	c := &s.clocks[len(s.clocks)-1]
	time, err := parseTime(s.fields[s.timeAt])
	if err != nil {
		return fmt.Errorf("time_s %w", err)
	}
	c.times = append(c.times, time)
	c.decimals = max(c.decimals, decimals(s.fields[s.timeAt]))
	for i, column := range s.columns {
		v, err := parseFloat(s.fields[column])
		if err != nil {
			return fmt.Errorf("stream %q %w", s.header[column], err)
		}
		s.values[i] = append(s.values[i], v)
	}
	s.samples++
	return nil
}

// timing finds the sample interval, the trials and their starts.
func (s *streamTable) timing(path string, spec *scenarios.Spec) error {
	longest := 0
	for i, c := range s.clocks {
		if len(c.times) < 2 {
			if s.trialAt < 0 {
				return fmt.Errorf("%s: a single sample: at least two are needed to know the interval between them", path)
			}
			return fmt.Errorf("%s row %d: trial %d has a single sample: at least two are needed", path, c.firstRow, s.numbers[i])
		}
		if len(c.times) > len(s.clocks[longest].times) {
			longest = i
		}
	}
	spec.Dt = s.clocks[longest].interval()
	for i, c := range s.clocks {
		if err := c.check(); err != nil {
			return fmt.Errorf("%s %w", path, err)
		}
		if own := c.interval(); i != longest && math.Abs(own-spec.Dt) > 0.01*spec.Dt {
			return fmt.Errorf("%s row %d: trial %d has a sample every %s s, trial %d every %s s: one interval is needed throughout",
				path, c.firstRow, s.numbers[i], short(own), s.numbers[longest], short(spec.Dt))
		}
		spec.StartS = append(spec.StartS, c.times[0])
	}
	if s.trialAt >= 0 {
		spec.TrialNumbers = s.numbers
		for _, c := range s.clocks {
			spec.TrialSamples = append(spec.TrialSamples, len(c.times))
		}
	}
	return nil
}

// decimals counts the digits after the point, those of a power of ten included.
func decimals(field []byte) int {
	mantissa, power := field, 0
	if e := bytes.IndexAny(field, "eE"); e >= 0 {
		mantissa = field[:e]
		if v, err := parseInteger(field[e+1:]); err == nil {
			power = int(max(min(v, 400), -400))
		}
	}
	places := 0
	if point := bytes.IndexByte(mantissa, '.'); point >= 0 {
		places = len(mantissa) - point - 1
	}
	return int(math.Max(0, float64(places-power)))
}
