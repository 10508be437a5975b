package files

import (
	"fmt"
	"math"
	"strconv"

	"codeassay/estimators"
	"codeassay/scenarios"
)

func readSpikesNPZ(path string, workers int, spec *scenarios.Spec) error {
	a, err := openArchive(path)
	if err != nil {
		return err
	}
	defer a.close()
	unit, err := a.need("unit")
	if err != nil {
		return err
	}
	time, err := a.need("time_s")
	if err != nil {
		return err
	}
	trial, event := a.arrays["trial"], a.arrays["event"]
	for _, v := range []*array{time, trial, event} {
		if v != nil && v.length != unit.length {
			return fmt.Errorf("%s: array %q has %d elements, \"unit\" has %d: one a spike is needed", path, v.name, v.length, unit.length)
		}
	}
	if unit.length == 0 {
		return fmt.Errorf("%s: no spikes", path)
	}
	if uint64(unit.length) > math.MaxUint32 {
		return fmt.Errorf("%s: %d spikes; up to 4294967295 can be read: split the recording", path, unit.length)
	}
	if err := time.mayBeKept(); err != nil {
		return err
	}
	var batch scenarios.SpikeBatch
	keys := func() (err error) {
		batch.Keys, batch.Runs, err = readKeys(unit, trial)
		return err
	}
	values := func() (err error) {
		batch.Times, err = readTimes(time)
		return err
	}
	if workers > 1 {
		failed := make(chan error, 1)
		go func() { failed <- values() }()
		err = keys()
		if late := <-failed; err == nil {
			err = late
		}
	} else if err = keys(); err == nil {
		err = values()
	}
	if err != nil {
		return err
	}
	if event != nil {
		if err := event.mayBeKept(); err != nil {
			return err
		}
		if batch.Labels, err = readEvents(event); err != nil {
			return err
		}
	}
	if time.kind == 'f' && time.size == 4 {
		noteFloat32(batch.Times, spec)
	}
	spec.Batches = []scenarios.SpikeBatch{batch}
	return nil
}

// run is a value that stands in so many successive rows.
type run struct {
	value int64
	count int
}

// readRuns reads an array of integers run-length coded.
func readRuns(v *array) ([]run, error) {
	var runs []run
	err := v.eachInteger(func(at int, values []int64) error {
		if len(runs) == 0 {
			runs = append(runs, run{value: values[0]})
		}
		last := &runs[len(runs)-1]
		for start := 0; start < len(values); {
			end := start
			for end < len(values) && values[end] == last.value {
				end++
			}
			last.count += end - start
			if start = end; start < len(values) {
				runs = append(runs, run{value: values[start]})
				last = &runs[len(runs)-1]
			}
		}
		return nil
	})
	return runs, err
}

// readKeys reads to which unit and trial the spikes belong. Units are streamed;
// only the trials' runs are kept.
func readKeys(unit, trial *array) ([]scenarios.SpikeKey, []scenarios.SpikeRun, error) {
	trials := []run{{value: scenarios.NoTrial, count: unit.length}}
	if trial != nil {
		var err error
		if trials, err = readRuns(trial); err != nil {
			return nil, nil, err
		}
	}
	type key struct{ unit, trial int64 }
	var (
		keys  []scenarios.SpikeKey
		runs  []scenarios.SpikeRun
		known = map[key]uint32{}
		names = map[int64]string{}
		quick = make([]struct { // the key last found for a unit, by its low bits
			key
			at uint32
		}, 1<<13)
		now  = key{unit: math.MinInt64}
		left = 0 // rows left in the present run of trials
	)
	for i := range quick {
		quick[i].unit = int64(i + 1) // never the unit of this place
	}
	find := func(k key) uint32 {
		q := &quick[k.unit&int64(len(quick)-1)]
		if q.key == k {
			return q.at
		}
		at, ok := known[k]
		if !ok {
			at = uint32(len(keys))
			known[k] = at
			name, ok := names[k.unit]
			if !ok {
				name = strconv.FormatInt(k.unit, 10)
				names[k.unit] = name
			}
			keys = append(keys, scenarios.SpikeKey{Unit: name, Trial: k.trial})
		}
		q.key, q.at = k, at
		return at
	}
	err := unit.eachInteger(func(_ int, values []int64) error {
		for start := 0; start < len(values); {
			if left == 0 {
				now.trial, left = trials[0].value, trials[0].count
				trials = trials[1:]
				now.unit = values[start] - 1 // the key has to be looked up again
			}
			end, limit := start, min(len(values), start+left)
			for end < limit && values[end] == now.unit {
				end++
			}
			if end > start {
				runs[len(runs)-1].Count += uint32(end - start)
				left -= end - start
				start = end
				continue
			}
			now.unit = values[start]
			if len(runs) == unit.length/16 { // not sorted by unit: no more growing by copies
				runs = append(scenarios.MakeLarge[scenarios.SpikeRun](unit.length)[:0], runs...)
			}
			runs = append(runs, scenarios.SpikeRun{Key: find(now)})
		}
		return nil
	})
	return keys, runs, err
}

// readTimes reads seconds as nanoseconds.
func readTimes(v *array) ([]int64, error) {
	out := scenarios.MakeLarge[int64](v.length)
	scratch := make([]float64, chunkBytes/v.size)
	err := v.chunks(func(at int, raw []byte) error {
		values := scratch[:len(raw)/v.size]
		v.floats(values, raw)
		for i, s := range values {
			if !(math.Abs(s) < 4e9) {
				return fmt.Errorf("%s row %d: time_s %w", v.path, at+i, scenarios.CheckTime(s))
			}
			out[at+i] = scenarios.Nanoseconds(s)
		}
		return nil
	})
	return out, err
}

func readEvents(v *array) ([]scenarios.EventLabel, error) {
	out := make([]scenarios.EventLabel, v.length)
	err := v.eachInteger(func(at int, values []int64) error {
		for i, n := range values {
			if n < int64(scenarios.FirstSpike) || n > int64(scenarios.SingleSpike) {
				return v.errorf("is %d at row %d: 1 (first), 2 (inner) or 3 (single) is needed", n, at+i)
			}
			out[at+i] = scenarios.EventLabel(n)
		}
		return nil
	})
	return out, err
}

// noteFloat32 says how coarse times in single precision are. A grain above 50 µs
// moves spikes across the edges of bins and bursts.
func noteFloat32(times []int64, spec *scenarios.Spec) {
	latest := 0.0
	for _, t := range times {
		latest = max(latest, math.Abs(scenarios.Seconds(t)))
	}
	grain := float64(math.Nextafter32(float32(latest), math.MaxFloat32)) - float64(float32(latest))
	severity := estimators.Note
	if grain > 50e-6 {
		severity = estimators.Weak
	}
	spec.Notes = append(spec.Notes, estimators.Warning{Severity: severity, About: "spikes",
		Text:   fmt.Sprintf("times are float32: the latest are known to %.2g ms only", grain*1e3),
		Remedy: "write time_s as float64"})
}
