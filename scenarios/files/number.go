package files

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"strconv"

	"codeassay/scenarios"
)

// parseFloat reads a finite decimal number.
func parseFloat(field []byte) (float64, error) {
	v, err := strconv.ParseFloat(string(field), 64)
	if err != nil || math.IsNaN(v) || math.IsInf(v, 0) || bytes.ContainsAny(field, "xX_") {
		return 0, notANumber(field)
	}
	return v, nil
}

// parseNanoseconds reads seconds as nanoseconds, exactly as
// scenarios.Nanoseconds(parseFloat(field)) does. Plain decimals with up to nine
// places below 1e6 s are whole nanoseconds; in that range the two roundings of
// the way through float64 err by less than 0.2 ns, so the digits alone give the
// same result.
func parseNanoseconds(field []byte) (int64, error) {
	digits := field
	if len(digits) > 0 && digits[0] == '-' {
		digits = digits[1:]
	}
	if len(digits) > 17 {
		return parseSlowly(field)
	}
	ns, seen, places := int64(0), 0, -1
	for _, c := range digits {
		switch {
		case c >= '0' && c <= '9':
			ns = ns*10 + int64(c-'0')
			seen++
			if places >= 0 {
				places++
			}
		case c == '.' && places < 0:
			places = 0
		default:
			return parseSlowly(field)
		}
	}
	places = max(places, 0)
	if seen == 0 || places > 9 || seen-places > 6 {
		return parseSlowly(field)
	}
	ns *= powersOfTen[9-places]
	if len(digits) < len(field) {
		ns = -ns
	}
	return ns, nil
}

var powersOfTen = [...]int64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9}

func parseSlowly(field []byte) (int64, error) {
	v, err := parseTime(field)
	return scenarios.Nanoseconds(v), err
}

// parseTime reads seconds.
func parseTime(field []byte) (float64, error) {
	v, err := parseFloat(field)
	if err == nil {
		err = scenarios.CheckTime(v)
	}
	if err != nil {
		return 0, err
	}
	return v, nil
}

// parseInteger reads a whole number; "3.0" is one, as tables with gaps write it.
func parseInteger(field []byte) (int64, error) {
	if n, err := strconv.ParseInt(string(field), 10, 64); err == nil {
		return n, nil
	}
	v, err := parseFloat(field)
	if err != nil {
		return 0, err
	}
	if v != math.Trunc(v) || math.Abs(v) > 1<<53 {
		return 0, fmt.Errorf("%q is not a whole number", field)
	}
	return int64(v), nil
}

func notANumber(field []byte) error {
	if len(field) == 0 {
		return errors.New("is empty: a number is needed")
	}
	if v, err := strconv.ParseFloat(string(field), 64); err == nil && (math.IsNaN(v) || math.IsInf(v, 0)) {
		return fmt.Errorf("is %s: a finite number is needed", field)
	}
	if _, err := strconv.ParseFloat(string(bytes.Replace(field, []byte{','}, []byte{'.'}, 1)), 64); err == nil && bytes.IndexByte(field, ',') >= 0 {
		return fmt.Errorf("is %q, with a decimal comma: write a point", field)
	}
	return fmt.Errorf("is %q: a number is needed", field)
}

// raggedRow tells of a row with too many or too few fields.
func raggedRow(fields [][]byte, header []string) error {
	if extra := len(fields) - len(header); extra > 0 {
		return fmt.Errorf("%d fields where the header has %d: if commas stand in decimals, write points", len(fields), len(header))
	}
	return fmt.Errorf("%d of the header's %d fields: every column needs a value in every row", len(fields), len(header))
}
