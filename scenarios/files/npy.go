package files

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
)

// layout is the header of a NumPy array file (NEP 1, format versions 1 to 3):
// what its elements are and how many.
type layout struct {
	kind   byte // 'f', 'i' or 'u'
	size   int  // bytes of an element
	big    bool // big-endian
	length int  // number of elements; 1 for a scalar
	scalar bool
	header int // bytes before the first element
}

// largestHeader is far above what any array of one axis needs.
const largestHeader = 64 << 10

func readLayout(in io.Reader) (layout, error) {
	var l layout
	start := make([]byte, 12)
	if _, err := io.ReadFull(in, start[:10]); err != nil {
		return l, errors.New("is cut off within its header")
	}
	if string(start[:6]) != "\x93NUMPY" {
		return l, errors.New("is not a NumPy array")
	}
	length := int(binary.LittleEndian.Uint16(start[8:]))
	l.header = 10
	switch start[6] {
	case 1:
	case 2, 3:
		if _, err := io.ReadFull(in, start[10:]); err != nil {
			return l, errors.New("is cut off within its header")
		}
		length = int(binary.LittleEndian.Uint32(start[8:]))
		l.header = 12
	default:
		return l, fmt.Errorf("has NumPy format version %d; 1 to 3 can be read", start[6])
	}
	if length > largestHeader {
		return l, fmt.Errorf("has a header of %d bytes, which no plain array needs", length)
	}
	text := make([]byte, length)
	if _, err := io.ReadFull(in, text); err != nil {
		return l, errors.New("is cut off within its header")
	}
	l.header += length
	return l, l.parse(string(text))
}

// parse reads the header's dictionary, which NumPy always writes as
// {'descr': '<f8', 'fortran_order': False, 'shape': (3,), }.
func (l *layout) parse(text string) error {
	descr, ok := value(text, "descr")
	if !ok {
		return errors.New("has a damaged header: no descr")
	}
	if len(descr) < 4 || descr[0] != '\'' && descr[0] != '"' || descr[len(descr)-1] != descr[0] {
		return fmt.Errorf("has elements of type %.40s; plain integers or floating-point numbers are needed", descr)
	}
	descr = descr[1 : len(descr)-1]
	l.big = descr[0] == '>'
	l.kind = descr[1]
	size, err := strconv.Atoi(descr[2:])
	if err != nil || strings.IndexByte("<>|=", descr[0]) < 0 || !readable(l.kind, size) {
		what := "type " + descr
		switch l.kind {
		case 'U', 'S':
			what = "text (" + descr + ")"
		case 'O':
			what = "pickled objects"
		}
		return fmt.Errorf("has elements of %s; integers (i1 to u8) or floating-point numbers (f4, f8) are needed", what)
	}
	l.size = size
	shape, ok := value(text, "shape")
	if !ok || len(shape) < 2 || shape[0] != '(' || shape[len(shape)-1] != ')' {
		return errors.New("has a damaged header: no shape")
	}
	axes := strings.Split(strings.TrimSuffix(strings.TrimSpace(shape[1:len(shape)-1]), ","), ",")
	if len(axes) > 1 {
		return fmt.Errorf("has shape %.40s; one axis is needed", shape)
	}
	if axes[0] = strings.TrimSpace(axes[0]); axes[0] == "" {
		l.length, l.scalar = 1, true
		return nil
	}
	n, err := strconv.ParseUint(strings.TrimSuffix(axes[0], "L"), 10, 63) // Python 2 wrote 3L
	if err != nil || n > math.MaxInt/16 {
		return fmt.Errorf("has an impossible shape %.40s", shape)
	}
	l.length = int(n)
	return nil
}

func readable(kind byte, size int) bool {
	switch kind {
	case 'f':
		return size == 4 || size == 8
	case 'i', 'u':
		return size == 1 || size == 2 || size == 4 || size == 8
	}
	return false
}

// value finds the text after 'key': up to the comma that ends it.
func value(text, key string) (string, bool) {
	at := strings.Index(text, "'"+key+"'")
	if at < 0 {
		return "", false
	}
	rest := strings.TrimLeft(text[at+len(key)+2:], " ")
	if !strings.HasPrefix(rest, ":") {
		return "", false
	}
	rest = strings.TrimLeft(rest[1:], " ")
	depth := 0
	for i := range len(rest) {
		switch rest[i] {
		case '(', '[', '{':
			depth++
		case ')', ']':
			depth--
		case ',', '}':
			if depth == 0 {
				return strings.TrimSpace(rest[:i]), true
			}
			if rest[i] == '}' {
				depth--
			}
		}
	}
	return "", false
}

// floats decodes elements of any kind to float64.
func (l *layout) floats(dst []float64, raw []byte) {
	switch {
	case l.kind != 'f':
		for i := range dst {
			if l.kind == 'u' && l.size == 8 {
				dst[i] = float64(l.bits(raw, i))
			} else {
				dst[i] = float64(l.integer(raw, i))
			}
		}
	case l.size == 8 && !l.big:
		for i := range dst {
			dst[i] = math.Float64frombits(binary.LittleEndian.Uint64(raw[8*i:]))
		}
	case l.size == 8:
		for i := range dst {
			dst[i] = math.Float64frombits(binary.BigEndian.Uint64(raw[8*i:]))
		}
	default:
		for i := range dst {
			dst[i] = float64(math.Float32frombits(uint32(l.bits(raw, i))))
		}
	}
}

// integers decodes elements of integer kind; those of uint64 above the range of
// int64 turn negative.
func (l *layout) integers(dst []int64, raw []byte) {
	if l.kind == 'i' && l.size == 4 && !l.big {
		for i := range dst {
			dst[i] = int64(int32(binary.LittleEndian.Uint32(raw[4*i:])))
		}
		return
	}
	if l.size == 8 && !l.big {
		for i := range dst {
			dst[i] = int64(binary.LittleEndian.Uint64(raw[8*i:]))
		}
		return
	}
	for i := range dst {
		dst[i] = l.integer(raw, i)
	}
}

func (l *layout) integer(raw []byte, i int) int64 {
	v := l.bits(raw, i)
	if l.kind == 'i' {
		unused := 64 - 8*l.size
		return int64(v<<unused) >> unused
	}
	return int64(v)
}

func (l *layout) bits(raw []byte, i int) uint64 {
	raw = raw[i*l.size : (i+1)*l.size]
	var order binary.ByteOrder = binary.LittleEndian
	if l.big {
		order = binary.BigEndian
	}
	switch l.size {
	case 1:
		return uint64(raw[0])
	case 2:
		return uint64(order.Uint16(raw))
	case 4:
		return uint64(order.Uint32(raw))
	}
	return order.Uint64(raw)
}
