package files

import (
	"fmt"
	"strings"

	"codeassay/scenarios"
)

func readStreamsNPZ(path string, alone bool, spec *scenarios.Spec) error {
	a, err := openArchive(path)
	if err != nil {
		return err
	}
	defer a.close()
	dt, err := a.need("dt_s")
	if err != nil {
		return err
	}
	if dt.length != 1 {
		return dt.errorf("has %d elements: one number is needed", dt.length)
	}
	interval, err := dt.numbers()
	if err != nil {
		return err
	}
	spec.Dt = interval[0]
	if start := a.arrays["start_s"]; start != nil {
		if spec.StartS, err = start.numbers(); err != nil {
			return err
		}
	}
	for _, name := range a.names {
		if !strings.HasPrefix(name, streamPrefix) || name == "stream_trial" {
			continue
		}
		v := a.arrays[name]
		samples, err := v.numbers()
		if err != nil {
			return err
		}
		spec.Streams = append(spec.Streams, scenarios.Stream{Name: strings.TrimPrefix(name, streamPrefix), Samples: samples})
	}
	if len(spec.Streams) == 0 {
		return fmt.Errorf("%s: no array stream_NAME: add one for each signal that drove the cells", path)
	}
	trial := a.arrays["stream_trial"]
	if trial == nil && alone && a.arrays["unit"] == nil {
		trial = a.arrays["trial"]
	}
	if trial == nil {
		if len(spec.StartS) > 1 {
			return fmt.Errorf("%s: array \"start_s\" has %d elements, but there is no stream_trial to tell the trials apart", path, len(spec.StartS))
		}
		return nil
	}
	if trial.length != len(spec.Streams[0].Samples) {
		return trial.errorf("has %d elements, stream %q has %d: one a sample is needed", trial.length, spec.Streams[0].Name, len(spec.Streams[0].Samples))
	}
	runs, err := readRuns(trial)
	if err != nil {
		return err
	}
	seen := map[int64]bool{}
	row := 0
	for _, r := range runs {
		if seen[r.value] {
			return trial.errorf("goes back to trial %d at row %d: the samples of a trial must follow each other", r.value, row)
		}
		seen[r.value] = true
		spec.TrialNumbers = append(spec.TrialNumbers, r.value)
		spec.TrialSamples = append(spec.TrialSamples, r.count)
		row += r.count
	}
	return nil
}
