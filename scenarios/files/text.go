package files

import (
	"bufio"
	"bytes"
	"compress/gzip"
	"errors"
	"fmt"
	"io"
	"os"
)

const (
	blockSize = 1 << 20
	// longestRow guards against files that are no tables at all.
	longestRow = 1 << 20
)

// text is a comma-separated file, handed out in blocks of whole rows.
type text struct {
	path   string
	file   *os.File
	in     *bufio.Reader
	header []string
	row    int    // number of the next row
	rest   []byte // of the last read, after its last line end
	done   bool
}

// block is some successive whole rows.
type block struct {
	data     []byte
	firstRow int
}

// openText opens the file, sees through gzip and a byte-order mark, and reads
// the header.
func openText(path string) (*text, error) {
	file, _, err := open(path)
	if err != nil {
		return nil, err
	}
	t := &text{path: path, file: file, in: bufio.NewReaderSize(file, 64<<10)}
	if err := t.start(); err != nil {
		file.Close()
		return nil, err
	}
	return t, nil
}

func (t *text) close() { t.file.Close() }

func (t *text) start() error {
	if magic, _ := t.in.Peek(2); bytes.Equal(magic, []byte{0x1f, 0x8b}) {
		unzipped, err := gzip.NewReader(t.in)
		if err != nil {
			return fmt.Errorf("%s: damaged gzip file (%w): write it again", t.path, err)
		}
		t.in = bufio.NewReaderSize(unzipped, 64<<10)
	}
	magic, err := t.in.Peek(4)
	if len(magic) == 0 {
		if err != nil && err != io.EOF {
			return t.failed(err)
		}
		return fmt.Errorf("%s: the file is empty", t.path)
	}
	switch {
	case bytes.HasPrefix(magic, []byte("PK\x03\x04")):
		return fmt.Errorf("%s: is a zip archive or spreadsheet, not comma-separated text: export it as CSV", t.path)
	case bytes.HasPrefix(magic, []byte{0xff, 0xfe}), bytes.HasPrefix(magic, []byte{0xfe, 0xff}):
		return fmt.Errorf("%s: is UTF-16 text: save it as UTF-8", t.path)
	case bytes.HasPrefix(magic, []byte("\xef\xbb\xbf")):
		if _, err := t.in.Discard(3); err != nil {
			return t.failed(err)
		}
	}
	t.row = 1
	first, err := t.next(nil)
	if err != nil {
		return err
	}
	line, after, _ := bytes.Cut(first.data, []byte{'\n'})
	fields, err := splitRow(nil, trimRow(line))
	if err != nil {
		return fmt.Errorf("%s row 1: %w", t.path, err)
	}
	for _, f := range fields {
		t.header = append(t.header, string(f))
	}
	t.row = 2
	t.rest = append(bytes.Clone(after), t.rest...)
	return nil
}

func (t *text) failed(err error) error {
	if errors.Is(err, gzip.ErrChecksum) || errors.Is(err, gzip.ErrHeader) || errors.Is(err, io.ErrUnexpectedEOF) {
		return fmt.Errorf("%s: damaged or cut-off gzip file (%w): write it again", t.path, err)
	}
	return fmt.Errorf("%s: %w", t.path, err)
}

// next reads the next block into buf, which may be nil. At the end of the file
// the block is empty. Every row in a block ends in a line feed.
func (t *text) next(buf []byte) (block, error) {
	buf = append(buf[:0], t.rest...)
	t.rest = t.rest[:0]
	for !t.done {
		have := len(buf)
		if cap(buf) < have+blockSize {
			buf = append(make([]byte, 0, have+blockSize), buf...)
		}
		n, err := io.ReadFull(t.in, buf[have:have+blockSize])
		buf = buf[:have+n]
		if err == io.EOF || err == io.ErrUnexpectedEOF && n < blockSize {
			if _, again := t.in.Peek(1); again != io.EOF {
				return block{}, t.failed(err) // a gzip stream that was cut off
			}
			t.done = true
		} else if err != nil {
			return block{}, t.failed(err)
		}
		if end := bytes.LastIndexByte(buf[have:], '\n') + 1; end > 0 {
			if !t.done {
				t.rest = append(t.rest, buf[have+end:]...)
				buf = buf[:have+end]
			}
			break
		}
		if len(buf) > longestRow {
			return block{}, fmt.Errorf("%s row %d: longer than 1 MB: the file is not a table of rows", t.path, t.row)
		}
	}
	if len(buf) > 0 && buf[len(buf)-1] != '\n' {
		buf = append(buf, '\n')
	}
	b := block{data: buf, firstRow: t.row}
	t.row += countRows(buf)
	return b, nil
}

// rows calls each with every row of a block. Empty rows are allowed at the end
// of a file only: emptyBefore is the first of those that ended the block before,
// or 0; the first of those that end this one is returned.
func (b block) rows(path string, emptyBefore int, each func(row int, line []byte) error) (emptyAt int, err error) {
	emptyAt = emptyBefore
	row := b.firstRow
	for data := b.data; len(data) > 0; row++ {
		end := bytes.IndexByte(data, '\n')
		line := trimRow(data[:end])
		data = data[end+1:]
		if len(line) == 0 {
			if emptyAt == 0 {
				emptyAt = row
			}
			continue
		}
		if emptyAt > 0 {
			return 0, emptyRow(path, emptyAt)
		}
		if err := each(row, line); err != nil {
			return 0, fmt.Errorf("%s row %d: %w", path, row, err)
		}
	}
	return emptyAt, nil
}

// each calls add with every row that is left in the file.
func (t *text) each(add func(row int, line []byte) error) error {
	var buf []byte
	emptyAt := 0
	for {
		b, err := t.next(buf)
		if err != nil || len(b.data) == 0 {
			return err
		}
		if emptyAt, err = b.rows(t.path, emptyAt, add); err != nil {
			return err
		}
		buf = b.data
	}
}

func emptyRow(path string, row int) error {
	return fmt.Errorf("%s row %d: the row is empty: remove it", path, row)
}

// trimRow drops blanks and the carriage return at the ends of a row.
func trimRow(line []byte) []byte {
	for len(line) > 0 && isBlank(line[len(line)-1]) {
		line = line[:len(line)-1]
	}
	for len(line) > 0 && isBlank(line[0]) {
		line = line[1:]
	}
	return line
}

func isBlank(c byte) bool { return c == ' ' || c == '\r' || c == '\t' }

// splitRow appends the fields of a row to dst, without the blanks and quotes
// around them.
func splitRow(dst [][]byte, line []byte) ([][]byte, error) {
	if bytes.IndexByte(line, '"') >= 0 {
		return splitQuoted(dst, line)
	}
	for {
		end := bytes.IndexByte(line, ',')
		if end < 0 {
			return append(dst, trimRow(line)), nil
		}
		dst = append(dst, trimRow(line[:end]))
		line = line[end+1:]
	}
}

func splitQuoted(dst [][]byte, line []byte) ([][]byte, error) {
	for {
		line = trimRow(line)
		if len(line) == 0 || line[0] != '"' {
			end := bytes.IndexByte(line, ',')
			if end < 0 {
				return append(dst, line), nil
			}
			dst = append(dst, trimRow(line[:end]))
			line = line[end+1:]
			continue
		}
		var field []byte
		line = line[1:]
		for {
			end := bytes.IndexByte(line, '"')
			if end < 0 {
				return nil, errors.New("a quote is not closed")
			}
			field = append(field, line[:end]...)
			line = line[end+1:]
			if len(line) == 0 || line[0] != '"' {
				break
			}
			field = append(field, '"') // a doubled quote stands for one
			line = line[1:]
		}
		dst = append(dst, field)
		line = trimRow(line)
		if len(line) == 0 {
			return dst, nil
		}
		if line[0] != ',' {
			return nil, fmt.Errorf("%q follows a closing quote: a comma is needed", line[0])
		}
		line = line[1:]
	}
}

func countRows(data []byte) int { return bytes.Count(data, []byte{'\n'}) }
