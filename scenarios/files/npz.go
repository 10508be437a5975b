package files

import (
	"archive/zip"
	"errors"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"
)

const (
	// chunkBytes is what is decoded at a time: it stays in the second-level cache.
	chunkBytes = 256 << 10
	// mostExpansion is above what deflate can do (1032 to 1).
	mostExpansion = 1040
	// An array that is to be kept in memory may be this large, or this many
	// times the bytes that it takes in the archive.
	freeBytes, mostKeptExpansion = 256 << 20, 100
)

// archive is an open .npz file.
type archive struct {
	path   string
	file   *os.File
	names  []string // of its arrays, without .npy
	arrays map[string]*array
}

// array is one entry of an archive.
type array struct {
	layout
	path, name string
	entry      *zip.File
}

var spikeArrays = []string{"unit", "time_s", "trial", "event"}
var streamArrays = []string{"dt_s", "start_s", "stream_trial"}

const streamPrefix = "stream_"

func openArchive(path string) (*archive, error) {
	file, size, err := open(path)
	if err != nil {
		return nil, err
	}
	a := &archive{path: path, file: file, arrays: map[string]*array{}}
	if err := a.index(size); err != nil {
		file.Close()
		return nil, err
	}
	return a, nil
}

func (a *archive) close() { a.file.Close() }

func (a *archive) index(size int64) error {
	var magic [2]byte
	if size == 0 {
		return fmt.Errorf("%s: the file is empty", a.path)
	}
	if _, err := a.file.ReadAt(magic[:], 0); err == nil && magic == [2]byte{0x1f, 0x8b} {
		return fmt.Errorf("%s: is compressed with gzip as a whole: unpack it (an .npz compresses its own arrays)", a.path)
	}
	in, err := zip.NewReader(a.file, size)
	if err != nil {
		return fmt.Errorf("%s: not an .npz archive, or one cut off (%w): write it again with numpy.savez", a.path, err)
	}
	for _, entry := range in.File {
		name := strings.TrimSuffix(entry.Name, ".npy")
		if a.arrays[name] != nil {
			return fmt.Errorf("%s: two arrays are named %q: rename one", a.path, name)
		}
		if !slices.Contains(spikeArrays, name) && !slices.Contains(streamArrays, name) && !strings.HasPrefix(name, streamPrefix) {
			return fmt.Errorf("%s: array %q is not known%s; expected unit, time_s, trial, event, dt_s, start_s, stream_trial and stream_NAME",
				a.path, name, hint(name, slices.Concat(spikeArrays, streamArrays)))
		}
		if entry.Flags&1 != 0 {
			return fmt.Errorf("%s: array %q is encrypted: write it plain", a.path, name)
		}
		if entry.Method != zip.Store && entry.Method != zip.Deflate {
			return fmt.Errorf("%s: array %q is compressed by method %d; stored or deflated arrays can be read", a.path, name, entry.Method)
		}
		if entry.CompressedSize64 > uint64(size) || entry.UncompressedSize64/mostExpansion > entry.CompressedSize64 ||
			entry.Method == zip.Store && entry.CompressedSize64 != entry.UncompressedSize64 {
			return fmt.Errorf("%s: array %q claims an impossible size of %d bytes: the file is damaged", a.path, name, entry.UncompressedSize64)
		}
		v := &array{path: a.path, name: name, entry: entry}
		if err := v.readHeader(); err != nil {
			return err
		}
		a.names = append(a.names, name)
		a.arrays[name] = v
	}
	return nil
}

func (v *array) errorf(format string, args ...any) error {
	return fmt.Errorf("%s: array %q %w", v.path, v.name, fmt.Errorf(format, args...))
}

func (v *array) readHeader() error {
	in, err := v.entry.Open()
	if err != nil {
		return v.errorf("cannot be read: %w", err)
	}
	defer in.Close()
	if v.layout, err = readLayout(in); err != nil {
		return v.errorf("%w", err)
	}
	if want := uint64(v.header) + uint64(v.length)*uint64(v.size); want != v.entry.UncompressedSize64 {
		return v.errorf("should take %d bytes by its header, but takes %d: the file is damaged", want, v.entry.UncompressedSize64)
	}
	return nil
}

// need returns an array that must be there.
func (a *archive) need(name string) (*array, error) {
	if v := a.arrays[name]; v != nil {
		return v, nil
	}
	return nil, fmt.Errorf("%s: no array %q%s", a.path, name, found(name, a.names))
}

// isInteger refuses arrays that are not of integers.
func (v *array) isInteger() error {
	if v.kind == 'f' {
		return v.errorf("has floating-point elements (f%d); integers are needed: write it with .astype(int)", v.size)
	}
	return nil
}

// mayBeKept guards against archives that expand without bound.
func (v *array) mayBeKept() error {
	if size := v.entry.UncompressedSize64; size > freeBytes && size/mostKeptExpansion > v.entry.CompressedSize64 {
		return v.errorf("would expand %d times, to %d bytes: write it uncompressed if that is meant", size/(v.entry.CompressedSize64+1), size)
	}
	return nil
}

// chunks hands over the raw elements, whole, a chunk at a time: element at and
// on. The checksum of the archive is verified.
func (v *array) chunks(each func(at int, raw []byte) error) error {
	in, err := v.entry.Open()
	if err != nil {
		return v.errorf("cannot be read: %w", err)
	}
	defer in.Close()
	buf := make([]byte, chunkBytes) // a header is shorter: see largestHeader
	if _, err := io.ReadFull(in, buf[:v.header]); err != nil {
		return v.damaged(err)
	}
	for at := 0; at < v.length; {
		n := min(chunkBytes/v.size, v.length-at)
		raw := buf[:n*v.size]
		if _, err := io.ReadFull(in, raw); err != nil {
			return v.damaged(err)
		}
		if err := each(at, raw); err != nil {
			return err
		}
		at += n
	}
	// The checksum is compared at the end of the entry.
	if _, err := in.Read(buf[:1]); err != io.EOF {
		return v.damaged(err)
	}
	return nil
}

func (v *array) damaged(err error) error {
	if errors.Is(err, zip.ErrChecksum) {
		return v.errorf("fails its checksum: the file is damaged")
	}
	return v.errorf("is damaged or cut off: %w", err)
}

// eachInteger decodes an array of integers, a chunk at a time.
func (v *array) eachInteger(each func(at int, values []int64) error) error {
	if err := v.isInteger(); err != nil {
		return err
	}
	scratch := make([]int64, chunkBytes/v.size)
	return v.chunks(func(at int, raw []byte) error {
		values := scratch[:len(raw)/v.size]
		v.integers(values, raw)
		if v.kind == 'u' && v.size == 8 {
			for i, n := range values {
				if n < 0 {
					return v.errorf("is %d at row %d: numbers up to 2^63−1 can be read", uint64(n), at+i)
				}
			}
		}
		return each(at, values)
	})
}

// numbers reads a whole array as float64.
func (v *array) numbers() ([]float64, error) {
	if err := v.mayBeKept(); err != nil {
		return nil, err
	}
	out := make([]float64, v.length)
	err := v.chunks(func(at int, raw []byte) error {
		v.floats(out[at:at+len(raw)/v.size], raw)
		return nil
	})
	return out, err
}
