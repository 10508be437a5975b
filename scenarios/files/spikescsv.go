package files

import (
	"fmt"
	"sync"

	"codeassay/scenarios"
)

var spikeColumns = []string{"unit", "time_s", "trial", "event"}

var eventLabels = map[string]scenarios.EventLabel{
	"first": scenarios.FirstSpike, "inner": scenarios.InnerSpike, "single": scenarios.SingleSpike,
}

// readSpikesCSV reads blocks in turn and parses them side by side; each becomes
// one batch, in the order of the file.
func readSpikesCSV(path string, workers int, spec *scenarios.Spec) error {
	t, err := openText(path)
	if err != nil {
		return err
	}
	defer t.close()
	at, err := t.find(spikeColumns, 2, false)
	if err != nil {
		return err
	}
	type job struct {
		block block
		to    *parsed
	}
	var (
		jobs   = make(chan job)
		spare  = make(chan []byte, workers+1)
		done   sync.WaitGroup
		all    []*parsed
		failed = make(chan struct{})
		once   sync.Once
	)
	for range workers {
		done.Go(func() {
			p := newSpikeParser(path, t.header, at)
			for j := range jobs {
				if *j.to = p.parse(j.block); j.to.err != nil {
					once.Do(func() { close(failed) })
				}
				select {
				case spare <- j.block.data:
				default:
				}
			}
		})
	}
	err = func() error {
		for {
			var buf []byte
			select {
			case <-failed:
				return nil
			case buf = <-spare:
			default:
			}
			b, err := t.next(buf)
			if err != nil || len(b.data) == 0 {
				return err
			}
			to := new(parsed)
			all = append(all, to)
			jobs <- job{b, to}
		}
	}()
	close(jobs)
	done.Wait()
	emptyAt := 0
	for _, p := range all { // blocks were handed out in turn: the first fault of the file is here
		if p.err != nil {
			return p.err
		}
		if len(p.batch.Times) > 0 && emptyAt > 0 {
			return emptyRow(path, emptyAt)
		}
		if emptyAt == 0 {
			emptyAt = p.emptyAt
		}
		spec.Batches = append(spec.Batches, p.batch)
	}
	if err == nil && len(all) == 0 {
		return fmt.Errorf("%s: a header but no spikes", path)
	}
	return err
}

// parsed is one block, read.
type parsed struct {
	batch   scenarios.SpikeBatch
	emptyAt int
	err     error
}

// spikeParser reads blocks of a spike table, one at a time.
type spikeParser struct {
	path   string
	header []string
	at     []int
	units  map[string]int // every unit met, numbered
	names  []string
	fields [][]byte
	keys   map[unitTrial]uint32 // of the present block
}

type unitTrial struct {
	unit  int
	trial int64
}

func newSpikeParser(path string, header []string, at []int) *spikeParser {
	return &spikeParser{path: path, header: header, at: at, units: map[string]int{}, keys: map[unitTrial]uint32{}}
}

func (p *spikeParser) parse(b block) parsed {
	var out parsed
	batch := &out.batch
	batch.FirstRow = b.firstRow
	rows := countRows(b.data)
	batch.Times = make([]int64, 0, rows)
	if p.at[3] >= 0 {
		batch.Labels = make([]scenarios.EventLabel, 0, rows)
	}
	clear(p.keys)
	last := unitTrial{unit: -1}
	out.emptyAt, out.err = b.rows(p.path, 0, func(row int, line []byte) (err error) {
		if p.fields, err = splitRow(p.fields[:0], line); err != nil {
			return err
		}
		if len(p.fields) != len(p.header) {
			return raggedRow(p.fields, p.header)
		}
		key := unitTrial{trial: scenarios.NoTrial}
		if unit := p.fields[p.at[0]]; last.unit >= 0 && p.names[last.unit] == string(unit) {
			key.unit = last.unit
		} else if key.unit, err = p.unit(unit); err != nil {
			return err
		}
		time, err := parseNanoseconds(p.fields[p.at[1]])
		if err != nil {
			return fmt.Errorf("time_s %w", err)
		}
		if p.at[2] >= 0 {
			if key.trial, err = parseInteger(p.fields[p.at[2]]); err != nil {
				return fmt.Errorf("trial %w", err)
			}
		}
		if p.at[3] >= 0 {
			label, ok := eventLabels[string(p.fields[p.at[3]])]
			if !ok {
				return fmt.Errorf("event is %q: first, inner or single is needed", p.fields[p.at[3]])
			}
			batch.Labels = append(batch.Labels, label)
		}
		batch.Times = append(batch.Times, time)
		if key == last {
			batch.Runs[len(batch.Runs)-1].Count++
			return nil
		}
		last = key
		at, ok := p.keys[key]
		if !ok {
			at = uint32(len(batch.Keys))
			p.keys[key] = at
			batch.Keys = append(batch.Keys, scenarios.SpikeKey{Unit: p.names[key.unit], Trial: key.trial})
		}
		batch.Runs = append(batch.Runs, scenarios.SpikeRun{Key: at, Count: 1})
		return nil
	})
	return out
}

func (p *spikeParser) unit(name []byte) (int, error) {
	if at, ok := p.units[string(name)]; ok {
		return at, nil
	}
	if len(name) == 0 {
		return 0, fmt.Errorf("unit is empty: a name is needed")
	}
	at := len(p.names)
	p.units[string(name)] = at
	p.names = append(p.names, string(name))
	return at, nil
}
