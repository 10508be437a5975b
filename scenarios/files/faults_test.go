package files

import (
	"bytes"
	"compress/gzip"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/scenarios"
)

const (
	goodSpikes  = "unit,time_s\na,0.1\na,0.25\nb,0.3\nb,0.35\n"
	goodStreams = "time_s,soma,dendrite\n0,1,2\n0.1,2,1\n0.2,1,3\n0.3,0,2\n"
	// Two trials, the input of which differs.
	trialSpikes  = "unit,time_s,trial\na,0.1,1\na,0.25,2\nb,0.1,1\nb,0.2,2\n"
	trialStreams = "time_s,soma,trial\n0,1,1\n0.1,2,1\n0.2,3,1\n0,4,2\n0.1,5,2\n0.2,7,2\n"
	sameStreams  = "time_s,soma,trial\n0,1,1\n0.1,2,1\n0.2,3,1\n0,1,2\n0.1,2,2\n0.2,3,2\n"
)

// write puts files into a new folder and reads the recording in it; the folder's
// path is cut out of the error.
func readTexts(t *testing.T, spikes, streams, units string, opts Options) (*scenarios.Recording, string) {
	t.Helper()
	dir := t.TempDir()
	put := func(name, content string) string {
		path := filepath.Join(dir, name)
		require.NoError(t, os.WriteFile(path, []byte(content), 0o666))
		return path
	}
	paths := Paths{Spikes: put("spikes.csv", spikes), Streams: put("streams.csv", streams)}
	if units != "" {
		paths.UnitsTable = put("units.csv", units)
	}
	rec, err := Read(paths, opts)
	if err != nil {
		return nil, strings.ReplaceAll(err.Error(), dir+string(filepath.Separator), "")
	}
	return rec, ""
}

func zipped(text string) string {
	var b bytes.Buffer
	w := gzip.NewWriter(&b)
	w.Write([]byte(text))
	w.Close()
	return b.String()
}

func TestFaultsOfTextFiles(t *testing.T) {
	tests := []struct {
		name                   string
		spikes, streams, units string
		opts                   Options
		want                   string
	}{
		{name: "empty spikes", spikes: "-",
			want: `spikes.csv: the file is empty`},
		{name: "empty streams", streams: "-",
			want: `streams.csv: the file is empty`},
		{name: "only a mark", spikes: "\ufeff",
			want: `spikes.csv: the first row is empty; expected the header unit,time_s[,trial][,event]`},
		{name: "header without spikes", spikes: "unit,time_s\n",
			want: `spikes.csv: a header but no spikes`},
		{name: "header without line end", spikes: "unit,time_s",
			want: `spikes.csv: a header but no spikes`},
		{name: "header without samples", streams: "time_s,soma\n",
			want: `streams.csv: a header but no samples`},
		{name: "header without units", units: "unit\n",
			want: `units.csv: a header but no units`},
		{name: "wrong header", spikes: "cell,time\na,0.1\n",
			want: `spikes.csv: no column "unit" (found ["cell" "time"]); expected the header unit,time_s[,trial][,event]`},
		{name: "near header", spikes: "unit,time\na,0.1\n",
			want: `spikes.csv: no column "time_s" (nearest is "time"); expected the header unit,time_s[,trial][,event]`},
		{name: "capitals", spikes: "Unit,Time_s\na,0.1\n",
			want: `spikes.csv: no column "unit" (nearest is "Unit"); expected the header unit,time_s[,trial][,event]`},
		{name: "no header", spikes: "a,0.1\nb,0.2\n",
			want: `spikes.csv: no column "unit" (found ["a" "0.1"]); expected the header unit,time_s[,trial][,event]`},
		{name: "unknown column", spikes: "unit,time_s,trail\na,0.1,1\n",
			want: `spikes.csv: column "trail" is not known (did you mean "trial"?); expected unit,time_s[,trial][,event]`},
		{name: "nameless column", spikes: ",unit,time_s\n0,a,0.1\n",
			want: `spikes.csv: column 1 has no name; expected unit,time_s[,trial][,event]`},
		{name: "column twice", spikes: "unit,time_s,time_s\na,0.1,0.1\n",
			want: `spikes.csv: two columns are named "time_s": rename one`},
		{name: "semicolons", spikes: "unit;time_s\na;0,1\n",
			want: `spikes.csv: the columns are separated by semicolons: use commas, and points in decimals`},
		{name: "tabs", spikes: "unit\ttime_s\na\t0.1\n",
			want: `spikes.csv: the columns are separated by tabs: use commas, and points in decimals`},
		{name: "streams without time", streams: "soma,dendrite\n1,2\n",
			want: `streams.csv: no column "time_s" (found ["soma" "dendrite"]); expected the header time_s,NAME,NAME…[,trial]`},
		{name: "streams with near time", streams: "time,soma\n1,2\n",
			want: `streams.csv: no column "time_s" (nearest is "time"); expected the header time_s,NAME,NAME…[,trial]`},
		{name: "stream twice", streams: "time_s,soma,soma\n0,1,2\n0.1,2,1\n",
			want: `streams.csv: two columns are named "soma": rename one`},
		{name: "no stream", streams: "time_s\n0\n0.1\n",
			want: `streams.csv: no stream beside time_s: add a column for each signal that drove the cells`},
		{name: "unknown unit column", units: "unit,max_isi\na,5\n",
			want: `units.csv: column "max_isi" is not known (did you mean "max_isi_ms"?); expected unit[,max_isi_ms][,first_isi_ms][,min_silence_ms][,cell_type][,condition]`},
		{name: "text for a time", spikes: "unit,time_s\na,0.1\na,soon\n",
			want: `spikes.csv row 3: time_s is "soon": a number is needed`},
		{name: "no time", spikes: "unit,time_s\na,0.1\na,\n",
			want: `spikes.csv row 3: time_s is empty: a number is needed`},
		{name: "no unit", spikes: "unit,time_s\na,0.1\n,0.2\n",
			want: `spikes.csv row 3: unit is empty: a name is needed`},
		{name: "NaN time", spikes: "unit,time_s\na,NaN\n",
			want: `spikes.csv row 2: time_s is NaN: a finite number is needed`},
		{name: "infinite time", spikes: "unit,time_s\na,inf\n",
			want: `spikes.csv row 2: time_s is inf: a finite number is needed`},
		{name: "hexadecimal time", spikes: "unit,time_s\na,0x10\n",
			want: `spikes.csv row 2: time_s is "0x10": a number is needed`},
		{name: "decimal comma", spikes: "unit,time_s\na,0,1\n",
			want: `spikes.csv row 2: 3 fields where the header has 2: if commas stand in decimals, write points`},
		{name: "quoted decimal comma", spikes: "unit,time_s\na,\"0,1\"\n",
			want: `spikes.csv row 2: time_s is "0,1", with a decimal comma: write a point`},
		{name: "decimal comma in streams", streams: "time_s,soma\n0,0,5\n0,1,0,7\n",
			want: `streams.csv row 2: 3 fields where the header has 2: if commas stand in decimals, write points`},
		{name: "short row", spikes: "unit,time_s\na,0.1\na\n",
			want: `spikes.csv row 3: 1 of the header's 2 fields: every column needs a value in every row`},
		{name: "empty row", spikes: "unit,time_s\na,0.1\n\na,0.2\n",
			want: `spikes.csv row 3: the row is empty: remove it`},
		{name: "empty row in streams", streams: "time_s,soma\n0,1\n\n0.1,2\n",
			want: `streams.csv row 3: the row is empty: remove it`},
		{name: "open quote", spikes: "unit,time_s\n\"a,0.1\n",
			want: `spikes.csv row 2: a quote is not closed`},
		{name: "text after a quote", spikes: "unit,time_s\n\"a\"b,0.1\n",
			want: `spikes.csv row 2: 'b' follows a closing quote: a comma is needed`},
		{name: "text for a trial", spikes: "unit,time_s,trial\na,0.1,one\n",
			want: `spikes.csv row 2: trial is "one": a number is needed`},
		{name: "half a trial", spikes: "unit,time_s,trial\na,0.1,1.5\n",
			want: `spikes.csv row 2: trial "1.5" is not a whole number`},
		{name: "unknown event", spikes: "unit,time_s,event\na,0.1,burst\n",
			want: `spikes.csv row 2: event is "burst": first, inner or single is needed`},
		{name: "text in a stream", streams: "time_s,soma\n0,1\n0.1,x\n",
			want: `streams.csv row 3: stream "soma" is "x": a number is needed`},
		{name: "gap in a stream", streams: "time_s,soma\n0,1\n0.1,\n",
			want: `streams.csv row 3: stream "soma" is empty: a number is needed`},
		{name: "NaN in a stream", streams: "time_s,soma\n0,1\n0.1,nan\n",
			want: `streams.csv row 3: stream "soma" is nan: a finite number is needed`},
		{name: "infinite stream", streams: "time_s,soma\n0,1\n0.1,-Inf\n",
			want: `streams.csv row 3: stream "soma" is -Inf: a finite number is needed`},
		{name: "NaN in stream times", streams: "time_s,soma\n0,1\nNaN,2\n",
			want: `streams.csv row 3: time_s is NaN: a finite number is needed`},
		{name: "streams of two lengths", streams: "time_s,soma,dendrite\n0,1,2\n0.1,2\n0.2,3\n",
			want: `streams.csv row 3: 2 of the header's 3 fields: every column needs a value in every row`},
		{name: "constant stream", streams: "time_s,soma,dendrite\n0,1,5\n0.1,2,5\n0.2,1,5\n0.3,0,5\n",
			want: `streams.csv: stream "dendrite" is constant (5) and so carries no information: leave it out or record what varied`},
		{name: "one sample", streams: "time_s,soma\n0,1\n",
			want: `streams.csv: a single sample: at least two are needed to know the interval between them`},
		{name: "unsorted streams", streams: "time_s,soma\n0,1\n0.1,2\n0.3,1\n0.2,0\n",
			want: `streams.csv row 5: time_s falls from 0.3 to 0.2: sort the rows by time`},
		{name: "repeated stream time", streams: "time_s,soma\n0,1\n0.1,2\n0.1,1\n0.2,0\n",
			want: `streams.csv row 4: time_s repeats 0.1: each sample needs a time of its own`},
		{name: "gap in stream times", streams: "time_s,soma\n0,1\n0.1,2\n0.2,1\n0.3,2\n0.5,0\n",
			want: `streams.csv row 6: time_s steps by 0.2 s where 0.1 s is usual: resample the streams uniformly, or split them into trials at gaps`},
		{name: "drifting stream times", streams: driftingStreams(),
			want: `streams.csv rows 2 to 401: the steps of time_s change slowly, from 0.1 to 0.1009 s: resample the streams uniformly`},
		{name: "negative time", spikes: "unit,time_s\na,0.1\nb,-0.05\n",
			want: `spikes.csv row 3: unit "b" spikes at -0.05 s, outside the recording, which runs from 0 to 0.4 s (the only such spike): correct the times or the clock, or drop such spikes with drop_outside = true`},
		{name: "outside", spikes: "unit,time_s\na,0.1\nb,0.4\nb,0.5\na,-1\n",
			want: `spikes.csv row 3: unit "b" spikes at 0.4 s, outside the recording, which runs from 0 to 0.4 s (3 such spikes, 1 before and 2 after it): correct the times or the clock, or drop such spikes with drop_outside = true`},
		{name: "before a late start", streams: "time_s,soma\n10,1\n10.1,2\n10.2,1\n",
			want: `spikes.csv row 2: unit "a" spikes at 0.1 s, outside the recording, which runs from 10 to 10.3 s (4 such spikes, 4 before and 0 after it): correct the times or the clock, or drop such spikes with drop_outside = true`},
		{name: "milliseconds", spikes: "unit,time_s\na,100\na,250.5\nb,390\n",
			want: `spikes.csv row 2: unit "a" spikes at 100 s, outside the recording, which runs from 0 to 0.4 s (3 such spikes, 0 before and 3 after it): times up to 390 look like milliseconds: divide them by 1000`},
		{name: "sample numbers", spikes: "unit,time_s\na,3000\na,7500\nb,11900\n",
			want: `spikes.csv row 2: unit "a" spikes at 3000 s, outside the recording, which runs from 0 to 0.4 s (3 such spikes, 0 before and 3 after it): times up to 11900 look like sample numbers (at about 29750 Hz): divide them by the sampling rate`},
		{name: "microseconds", spikes: "unit,time_s\na,100000\na,250000\nb,390000\n",
			want: `spikes.csv row 2: unit "a" spikes at 100000 s, outside the recording, which runs from 0 to 0.4 s (3 such spikes, 0 before and 3 after it): times up to 390000 look like microseconds: divide them by 1e6`},
		{name: "absurd time", spikes: "unit,time_s\na,1e300\n",
			want: `spikes.csv row 2: time_s is 1e+300, above 4e9 s (126 years): write seconds`},
		{name: "nothing inside", spikes: "unit,time_s\na,5\na,6\n", opts: Options{DropOutside: true},
			want: `spikes.csv: all 2 spikes lie outside the recording: correct the times or the clock`},
		{name: "duration too long", opts: Options{DurationS: 0.5},
			want: `streams.csv: duration_s = 0.5, but the streams end after 0.4 s: shorten duration_s or leave it out`},
		{name: "duration too short", opts: Options{DurationS: 0.1},
			want: `streams.csv: duration_s = 0.1 is less than two samples of 0.1 s`},
		{name: "negative duration", opts: Options{DurationS: -1},
			want: `duration_s = -1: it must be positive, or left out`},
		{name: "cut by the duration", opts: Options{DurationS: 0.3},
			want: `spikes.csv row 4: unit "b" spikes at 0.3 s, outside the recording, which runs from 0 to 0.3 s (2 such spikes, 0 before and 2 after it): correct the times or the clock, or drop such spikes with drop_outside = true`},
		{name: "too few units", opts: Options{Units: 1},
			want: `units = 1, but spikes.csv has spikes of 2 units: declare at least as many, or leave units out`},
		{name: "unknown unit", units: "unit,max_isi_ms\na,5\nc,6\n",
			want: `units.csv row 3: unit "c" has no spikes in spikes.csv: correct its name, or declare silent units with units = 3`},
		{name: "unit twice", units: "unit,max_isi_ms\na,5\na,6\n",
			want: `units.csv row 3: unit "a" appears a second time: keep one row`},
		{name: "negative limit", units: "unit,max_isi_ms\na,-5\n",
			want: `units.csv row 2: max_isi_ms is -5: milliseconds from 0 to 1e9 are needed`},
		{name: "text for a limit", units: "unit,max_isi_ms\na,short\n",
			want: `units.csv row 2: max_isi_ms is "short": a number is needed`},
		{name: "trials in streams alone", streams: trialStreams,
			want: `spikes.csv: no trial column, but streams.csv has 2 trials: say for each spike to which trial it belongs`},
		{name: "trials in spikes alone", spikes: trialSpikes, streams: "time_s,soma\n0,1\n0.1,2\n0.2,1\n",
			want: `streams.csv: one stretch of streams for 2 trials, so say what a trial is: trials = "cells" if each trial of a unit stands for one more cell of a population under this input, "frozen-repeats" if they are repeats of one input to the same cells; if the input was new each time, add a trial column here`},
		{name: "segments without their streams", spikes: trialSpikes, streams: "time_s,soma\n0,1\n0.1,2\n0.2,1\n", opts: Options{Trials: scenarios.Segments},
			want: `streams.csv: trials = "segments" needs the streams of each of the 2 trials: add a trial column, or say "cells" or "frozen-repeats" if the input was the same each time`},
		{name: "trial without streams", spikes: trialSpikes + "a,0.1,3\n", streams: trialStreams,
			want: `spikes.csv row 6: trial 3 is not among the trials of streams.csv (1 to 2): correct the number or add its streams`},
		{name: "scattered trial", spikes: trialSpikes, streams: trialStreams + "0.3,4,1\n",
			want: `streams.csv row 8: trial 1 goes on after another trial: sort the rows by trial and time`},
		{name: "trial of one sample", spikes: trialSpikes, streams: trialStreams + "0,4,3\n",
			want: `streams.csv row 8: trial 3 has a single sample: at least two are needed`},
		{name: "trial of another interval", spikes: trialSpikes, streams: "time_s,soma,trial\n0,1,1\n0.1,2,1\n0.2,3,1\n0,4,2\n0.2,5,2\n",
			want: `streams.csv row 5: trial 2 has a sample every 0.2 s, trial 1 every 0.1 s: one interval is needed throughout`},
		{name: "spike outside its trial", spikes: trialSpikes + "b,0.3,2\n", streams: trialStreams,
			want: `spikes.csv row 6: unit "b" spikes at 0.3 s of trial 2, outside the recording, which runs from 0 to 0.3 s (the only such spike): correct the times or the clock, or drop such spikes with drop_outside = true`},
		{name: "same streams", spikes: trialSpikes, streams: sameStreams,
			want: `streams.csv: the 2 trials have the same streams, so say what a trial is: trials = "cells" if each trial of a unit stands for one more cell of a population under this input, "frozen-repeats" if they are repeats of one input to the same cells, "segments" only if the input was in fact new each time`},
		{name: "unknown meaning", spikes: trialSpikes, streams: sameStreams, opts: Options{Trials: "cell"},
			want: `trials = "cell": it must be "segments", "cells" or "frozen-repeats" (did you mean "cells"?)`},
		{name: "cells under different inputs", spikes: trialSpikes, streams: trialStreams, opts: Options{Trials: scenarios.TrialsAsCells},
			want: `streams.csv: trials = "cells" needs one and the same input in every trial, but stream "soma" differs between trials 1 and 2: say "segments" if the input was new each time`},
		{name: "repeats of different lengths", spikes: trialSpikes, streams: sameStreams + "0.3,9,2\n", opts: Options{Trials: scenarios.FrozenRepeats},
			want: `streams.csv: trials = "frozen-repeats" needs trials of one length, they have 3 to 4 samples: set duration_s = 0.3`},
		{name: "one trial of two", spikes: trialSpikes, streams: trialStreams, opts: Options{Trials: scenarios.OneTrial},
			want: `trials = "one", but there are 2 trials: say "segments", "cells" or "frozen-repeats"`},
		{name: "spreadsheet", spikes: "PK\x03\x04rest",
			want: `spikes.csv: is a zip archive or spreadsheet, not comma-separated text: export it as CSV`},
		{name: "UTF-16", spikes: "\xff\xfeu\x00n\x00",
			want: `spikes.csv: is UTF-16 text: save it as UTF-8`},
		{name: "cut-off gzip", spikes: zipped(goodSpikes)[:40],
			want: `spikes.csv: damaged or cut-off gzip file (unexpected EOF): write it again`},
		{name: "broken gzip", spikes: "\x1f\x8b\x08nothing more here",
			want: `spikes.csv: damaged gzip file (unexpected EOF): write it again`},
		{name: "endless row", spikes: "unit,time_s\n" + strings.Repeat("a", 3<<20),
			want: `spikes.csv row 2: longer than 1 MB: the file is not a table of rows`},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			spikes, streams := goodSpikes, goodStreams
			if test.spikes != "" {
				spikes = strings.TrimPrefix(test.spikes, "-")
			}
			if test.streams != "" {
				streams = strings.TrimPrefix(test.streams, "-")
			}
			for _, workers := range []int{1, 3} {
				test.opts.Workers = workers
				_, got := readTexts(t, spikes, streams, test.units, test.opts)
				assert.Equal(t, test.want, got)
			}
		})
	}
}

// driftingStreams has steps of 0.1 s that slowly become 0.1009 s.
func driftingStreams() string {
	var b strings.Builder
	b.WriteString("time_s,soma\n")
	time := 0.0
	for i := range 400 {
		b.Write(appendSeconds(nil, int64(time*1e9)))
		b.WriteString([]string{",1\n", ",2\n"}[i%2])
		time += 0.1
		if i >= 200 {
			time += 0.0009
		}
	}
	return b.String()
}
