package files

import (
	"archive/zip"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"strconv"

	"codeassay/scenarios"
)

// WriteNPZ writes spikes and streams into one uncompressed .npz archive, which
// gets its name when it is complete. Units have to be named by whole numbers.
// What WriteCSV has no place for is not written here either, nor are the units'
// own limits, types and conditions.
func WriteNPZ(path string, src Source) error {
	return writeAll([]string{path}, []func(*pending) error{func(p *pending) error {
		w := &archiveWriter{zip: zip.NewWriter(p), src: src}
		if err := w.write(); err != nil {
			return err
		}
		return w.zip.Close()
	}})
}

type archiveWriter struct {
	zip     *zip.Writer
	src     Source
	numbers []int64 // of the units that spike
	counts  [][]int // spikes by unit and trial
	spikes  int
}

func (w *archiveWriter) write() error {
	if err := w.count(); err != nil {
		return err
	}
	trials := w.src.Trials()
	perSpike := func(name string, value func(unit, trial int) int64) error {
		return w.integers(name, w.spikes, func(yield func(v int64, times int)) {
			for u := range w.counts {
				for t, n := range w.counts[u] {
					yield(value(u, t), n)
				}
			}
		})
	}
	if err := perSpike("unit", func(u, _ int) int64 { return w.numbers[u] }); err != nil {
		return err
	}
	if withTrials(w.src) {
		if err := perSpike("trial", func(_, t int) int64 { return trials[t].Number }); err != nil {
			return err
		}
	}
	if err := w.times(); err != nil {
		return err
	}
	if withLabels(w.src) {
		if err := w.events(); err != nil {
			return err
		}
	}
	out, err := w.array("dt_s", "<f8", "()")
	if err != nil {
		return err
	}
	if err := binary.Write(out, binary.LittleEndian, w.src.Dt()); err != nil {
		return err
	}
	samples := 0
	for _, t := range trials {
		samples += t.Samples
	}
	for s, stream := range w.src.Streams() {
		if stream.Name == "trial" {
			return fmt.Errorf("a stream cannot be named %q here: rename it", stream.Name)
		}
		out, err := w.array(streamPrefix+stream.Name, "<f8", shape(samples))
		if err != nil {
			return err
		}
		for t := range trials {
			if err := writeChunks(out, w.src.StreamSamples(s, t)); err != nil {
				return err
			}
		}
	}
	if !withTrials(w.src) {
		return nil
	}
	return w.integers("stream_trial", samples, func(yield func(v int64, times int)) {
		for _, t := range trials {
			yield(t.Number, t.Samples)
		}
	})
}

// count counts the spikes, which an array's header has to know beforehand.
func (w *archiveWriter) count() error {
	var train []int64
	for u, unit := range w.src.Units() {
		counts, total := make([]int, len(w.src.Trials())), 0
		for t := range counts {
			train = w.src.Train(train[:0], u, t)
			counts[t] = len(train)
			total += len(train)
		}
		n, err := strconv.ParseInt(unit.Name, 10, 64)
		if total > 0 && (err != nil || strconv.FormatInt(n, 10) != unit.Name) {
			return fmt.Errorf("unit %q: an .npz names units by whole numbers: write CSV instead", unit.Name)
		}
		w.numbers = append(w.numbers, n)
		w.counts = append(w.counts, counts)
		w.spikes += total
	}
	return nil
}

func (w *archiveWriter) times() error {
	out, err := w.array("time_s", "<f8", shape(w.spikes))
	if err != nil {
		return err
	}
	var train []int64
	var seconds []float64
	for u := range w.counts {
		for t := range w.counts[u] {
			train = w.src.Train(train[:0], u, t)
			seconds = seconds[:0]
			for _, ns := range train {
				seconds = append(seconds, scenarios.Seconds(ns))
			}
			if err := writeChunks(out, seconds); err != nil {
				return err
			}
		}
	}
	return nil
}

func (w *archiveWriter) events() error {
	out, err := w.array("event", "|u1", shape(w.spikes))
	if err != nil {
		return err
	}
	for u := range w.counts {
		for t := range w.counts[u] {
			raw := make([]byte, 0, w.counts[u][t])
			for _, l := range w.src.Labels(u, t) {
				raw = append(raw, byte(l))
			}
			if _, err := out.Write(raw); err != nil {
				return err
			}
		}
	}
	return nil
}

// array starts an array: format version 1, data aligned to 64 bytes (NEP 1).
func (w *archiveWriter) array(name, descr, shape string) (io.Writer, error) {
	out, err := w.zip.CreateHeader(&zip.FileHeader{Name: name + ".npy", Method: zip.Store})
	if err != nil {
		return nil, err
	}
	header := fmt.Sprintf("{'descr': '%s', 'fortran_order': False, 'shape': %s, }", descr, shape)
	for (10+len(header)+1)%64 != 0 {
		header += " "
	}
	header += "\n"
	start := binary.LittleEndian.AppendUint16([]byte("\x93NUMPY\x01\x00"), uint16(len(header)))
	_, err = out.Write(append(start, header...))
	return out, err
}

func shape(n int) string { return fmt.Sprintf("(%d,)", n) }

// integers writes runs of values, as int32 where all of them fit.
func (w *archiveWriter) integers(name string, length int, runs func(yield func(v int64, times int))) error {
	descr, size := "<i4", 4
	runs(func(v int64, times int) {
		if times > 0 && (v < math.MinInt32 || v > math.MaxInt32) {
			descr, size = "<i8", 8
		}
	})
	out, err := w.array(name, descr, shape(length))
	if err != nil {
		return err
	}
	raw := make([]byte, 0, chunkBytes)
	runs(func(v int64, times int) {
		for range times {
			if len(raw)+size > cap(raw) {
				if _, failed := out.Write(raw); err == nil {
					err = failed
				}
				raw = raw[:0]
			}
			if size == 4 {
				raw = binary.LittleEndian.AppendUint32(raw, uint32(int32(v)))
			} else {
				raw = binary.LittleEndian.AppendUint64(raw, uint64(v))
			}
		}
	})
	if err != nil {
		return err
	}
	_, err = out.Write(raw)
	return err
}

func writeChunks(out io.Writer, values []float64) error {
	raw := make([]byte, 0, min(chunkBytes, 8*len(values)))
	for len(values) > 0 {
		n := min(len(values), chunkBytes/8)
		raw = raw[:0]
		for _, v := range values[:n] {
			raw = binary.LittleEndian.AppendUint64(raw, math.Float64bits(v))
		}
		if _, err := out.Write(raw); err != nil {
			return err
		}
		values = values[n:]
	}
	return nil
}
