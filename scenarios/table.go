package scenarios

import (
	"fmt"
	"math"
	"slices"
	"strconv"
)

// spikeTable is all batches under one set of keys.
type spikeTable struct {
	from     string
	batches  []SpikeBatch
	keys     []SpikeKey
	index    [][]uint32 // of each batch: its key → keys
	labelled bool

	counts []int  // spikes of each key inside the recording
	sorted []bool // whether they come by rising time, and no order of labels is left open
}

func gather(spec *Spec) (*spikeTable, error) {
	t := &spikeTable{from: spec.SpikesFrom, batches: spec.Batches}
	if t.batches == nil {
		batch, err := spec.Columns.batch(spec.SpikesFrom)
		if err != nil {
			return nil, err
		}
		t.batches = []SpikeBatch{batch}
	}
	known := map[SpikeKey]uint32{}
	total := 0
	for i := range t.batches {
		b := &t.batches[i]
		index := make([]uint32, len(b.Keys))
		for k, key := range b.Keys {
			at, ok := known[key]
			if !ok {
				at = uint32(len(t.keys))
				known[key] = at
				t.keys = append(t.keys, key)
			}
			index[k] = at
		}
		t.index = append(t.index, index)
		total += len(b.Times)
		if b.Labels != nil {
			t.labelled = true
		}
	}
	if total == 0 {
		return nil, fmt.Errorf("%s: no spikes", t.from)
	}
	for _, b := range t.batches {
		rows := 0
		for _, r := range b.Runs {
			rows += int(r.Count)
		}
		if rows != len(b.Times) || t.labelled && len(b.Labels) != rows {
			panic("scenarios: columns of a spike batch differ in length")
		}
	}
	return t, nil
}

// batch turns columns into one batch, leaving the columns as they are.
func (c SpikeColumns) batch(from string) (SpikeBatch, error) {
	n := max(len(c.Unit), len(c.Index))
	b := SpikeBatch{FirstRow: c.FirstRow, Labels: slices.Clone(c.Label), Times: slices.Clone(c.TimeNS)}
	if len(c.TimeS) > 0 {
		b.Times = make([]int64, len(c.TimeS))
		for i, s := range c.TimeS {
			if err := CheckTime(s); err != nil {
				return b, fmt.Errorf("%s row %d: the time %w", from, c.FirstRow+i, err)
			}
			b.Times[i] = Nanoseconds(s)
		}
	}
	for _, other := range []struct {
		column string
		length int
	}{{"times", len(b.Times)}, {"trials", len(c.Trial)}, {"labels", len(c.Label)}} {
		if other.length != n && (other.length > 0 || other.column == "times") {
			return b, fmt.Errorf("%s: %d units but %d %s: one a spike is needed", from, n, other.length, other.column)
		}
	}
	known := map[SpikeKey]uint32{}
	for i := range n {
		key := SpikeKey{Trial: NoTrial}
		if c.Unit != nil {
			key.Unit = c.Unit[i]
		} else {
			key.Unit = strconv.Itoa(c.Index[i])
		}
		if c.Trial != nil {
			key.Trial = c.Trial[i]
		}
		at, ok := known[key]
		if !ok {
			at = uint32(len(b.Keys))
			known[key] = at
			b.Keys = append(b.Keys, key)
		}
		if last := len(b.Runs) - 1; last >= 0 && b.Runs[last].Key == at && b.Runs[last].Count < math.MaxUint32 {
			b.Runs[last].Count++
		} else {
			b.Runs = append(b.Runs, SpikeRun{Key: at, Count: 1})
		}
	}
	return b, nil
}

// firstRow finds the first row whose key satisfies is.
func (t *spikeTable) firstRow(is func(SpikeKey) bool) (row int, key SpikeKey) {
	for i, b := range t.batches {
		row = b.FirstRow
		for _, r := range b.Runs {
			if key = t.keys[t.index[i][r.Key]]; is(key) {
				return row, key
			}
			row += int(r.Count)
		}
	}
	return -1, SpikeKey{}
}

// toTrials makes every time relative to the start of its trial and leaves out,
// or refuses, what lies outside. trialOf is the trial of each key.
func (t *spikeTable) toTrials(line *timeline, trialOf []int, drop bool) (dropped int, err error) {
	t.counts = make([]int, len(t.keys))
	t.sorted = make([]bool, len(t.keys))
	last := make([]int64, len(t.keys))
	for i := range t.sorted {
		t.sorted[i], last[i] = true, math.MinInt64
	}
	var out outside
	for i := range t.batches {
		b := &t.batches[i]
		row, kept := 0, 0
		for r := range b.Runs {
			run := &b.Runs[r]
			key := t.index[i][run.Key]
			trial := trialOf[key]
			start, duration := line.starts[trial], uint64(line.trials[trial].Duration)
			previous, rising, from := last[key], true, kept
			for _, time := range b.Times[row : row+int(run.Count)] {
				time -= start
				if uint64(time) >= duration { // before 0 wraps to above it
					out.add(time, spikeAt{row: b.FirstRow + row, key: t.keys[key], trial: trial})
				} else {
					rising = rising && (time > previous || time == previous && b.Labels == nil)
					previous = time
					b.Times[kept] = time
					if b.Labels != nil {
						b.Labels[kept] = b.Labels[row]
					}
					kept++
				}
				row++
			}
			run.Count = uint32(kept - from)
			t.counts[key] += kept - from
			t.sorted[key] = t.sorted[key] && rising
			last[key] = previous
		}
		b.Times = b.Times[:kept]
		if b.Labels != nil {
			b.Labels = b.Labels[:kept]
		}
	}
	if out.count > 0 && !drop {
		return 0, out.err(t.from, line)
	}
	return out.count, nil
}

// lay puts the spikes into one slice, train after train; train is the place of
// each key among them. Where one batch already has that order, its own memory is
// used.
func (t *spikeTable) lay(train []int, trains int) (times []int64, offsets []int, labels []EventLabel) {
	offsets = make([]int, trains+1)
	for key, n := range t.counts {
		offsets[train[key]+1] += n
	}
	for i := range trains {
		offsets[i+1] += offsets[i]
	}
	if t.inPlace(train) {
		times, labels = t.batches[0].Times, t.batches[0].Labels
	} else {
		times = MakeLarge[int64](offsets[trains])
		if t.labelled {
			labels = make([]EventLabel, len(times))
		}
		next := slices.Clone(offsets)
		for i := range t.batches {
			b := t.batches[i]
			t.batches[i] = SpikeBatch{} // lets go of its memory
			row := 0
			for _, run := range b.Runs {
				to, n := &next[train[t.index[i][run.Key]]], int(run.Count)
				if n == 1 { // the usual run of a table sorted by time
					times[*to] = b.Times[row]
				} else {
					copy(times[*to:], b.Times[row:row+n])
				}
				if labels != nil {
					copy(labels[*to:], b.Labels[row:row+n])
				}
				*to += n
				row += n
			}
		}
	}
	for key, rising := range t.sorted {
		if lo, hi := offsets[train[key]], offsets[train[key]+1]; !rising {
			sortTrain(times[lo:hi], labels, lo)
		}
	}
	return times, offsets, labels
}

func (t *spikeTable) inPlace(train []int) bool {
	if len(t.batches) != 1 {
		return false
	}
	at := -1
	for _, run := range t.batches[0].Runs {
		next := train[t.index[0][run.Key]]
		if run.Count > 0 && next < at {
			return false
		}
		at = max(at, next)
	}
	return true
}

// sortTrain sorts by time, and spikes at one time by label, so that the order of
// rows leaves no trace.
func sortTrain(times []int64, labels []EventLabel, lo int) {
	if labels == nil {
		slices.Sort(times)
		return
	}
	labels = labels[lo : lo+len(times)]
	type spike struct {
		time  int64
		label EventLabel
	}
	spikes := make([]spike, len(times))
	for i := range spikes {
		spikes[i] = spike{times[i], labels[i]}
	}
	slices.SortFunc(spikes, func(a, b spike) int {
		if a.time != b.time {
			if a.time < b.time {
				return -1
			}
			return 1
		}
		return int(a.label) - int(b.label)
	})
	for i, s := range spikes {
		times[i], labels[i] = s.time, s.label
	}
}
