package files

import (
	"archive/zip"
	"os"
	"path/filepath"
	"testing"

	"codeassay/scenarios"
)

// Whatever the bytes, reading ends in a recording whose promises hold or in one
// line of error. Try longer with go test -fuzz FuzzText ./scenarios/files.

func FuzzText(f *testing.F) {
	f.Add([]byte(goodSpikes), []byte(goodStreams))
	f.Add([]byte(trialSpikes), []byte(trialStreams))
	f.Add([]byte("\ufeffunit,time_s,event\r\n\"a\",1e-1,first\r\n\r\n"), []byte("time_s,x\n0,1\n.1,-2e-300"))
	f.Add([]byte(zipped(goodSpikes)), []byte(zipped(sameStreams)))
	f.Add([]byte("unit,time_s\n\"a\"\",0.1\n"), []byte("time_s\n"))
	f.Fuzz(func(t *testing.T, spikes, streams []byte) {
		dir := t.TempDir()
		paths := Paths{Spikes: filepath.Join(dir, "spikes.csv"), Streams: filepath.Join(dir, "streams.csv")}
		check(t, paths, map[string][]byte{paths.Spikes: spikes, paths.Streams: streams})
	})
}

func FuzzArchive(f *testing.F) {
	f.Add(pack(zip.Store, goodArrays()))
	f.Add(pack(zip.Deflate, goodArrays()))
	f.Add(pack(zip.Store, with("trial", vector("|u1", 3, []uint8{1, 2, 1}))))
	f.Add(pack(zip.Store, with("unit", npy("{'descr': '>i2', 'fortran_order': True, 'shape': (3L,), }", []int16{0, 256, 0}))))
	f.Fuzz(func(t *testing.T, data []byte) {
		paths := Paths{Spikes: filepath.Join(t.TempDir(), "x.npz")}
		check(t, paths, map[string][]byte{paths.Spikes: data})
	})
}

// FuzzArrayHeader passes by the zip container, whose checksums stop most changes.
func FuzzArrayHeader(f *testing.F) {
	for _, a := range goodArrays() {
		f.Add(a.data, uint8(0))
	}
	f.Add(npy("{'descr': '<f8', 'fortran_order': False, 'shape': ()}", []float64{1e300}), uint8(2)) // no such interval
	f.Add(npy("{'shape': (3, ), 'descr': '|u1'}", []uint8{1, 2, 3}), uint8(1))
	f.Fuzz(func(t *testing.T, data []byte, which uint8) {
		arrays := goodArrays()
		arrays[int(which)%len(arrays)].data = data
		paths := Paths{Spikes: filepath.Join(t.TempDir(), "x.npz")}
		check(t, paths, map[string][]byte{paths.Spikes: pack(zip.Store, arrays)})
	})
}

func check(t *testing.T, paths Paths, content map[string][]byte) {
	for path, data := range content {
		if err := os.WriteFile(path, data, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	for _, meaning := range []scenarios.TrialMeaning{"", scenarios.TrialsAsCells} {
		rec, err := Read(paths, Options{Trials: meaning, DropOutside: meaning != "", Workers: 2})
		if err != nil {
			continue
		}
		spikes := 0
		for u := range rec.Units() {
			for k, trial := range rec.Trials() {
				train := rec.Train(nil, u, k)
				spikes += len(train)
				for i, at := range train {
					if at < 0 || at >= trial.Duration || i > 0 && at < train[i-1] {
						t.Fatalf("time %d ns in a trial of %d ns", at, trial.Duration)
					}
				}
				for s := range rec.Streams() {
					if len(rec.StreamSamples(s, k)) != trial.Samples {
						t.Fatal("samples of a trial")
					}
				}
			}
		}
		if spikes != rec.Spikes() || spikes == 0 {
			t.Fatal("spikes lost")
		}
	}
}
