package files

import (
	"fmt"
	"math"

	"codeassay/scenarios"
)

var unitColumns = []string{"unit", "max_isi_ms", "first_isi_ms", "min_silence_ms", "cell_type", "condition"}

// readUnitsTable reads one row a unit; an empty limit leaves the study's.
func readUnitsTable(path string) ([]scenarios.Unit, error) {
	if extension(path) != ".csv" {
		return nil, fmt.Errorf("%s: cannot read %q as a units table; .csv can be read", path, extension(path))
	}
	t, err := openText(path)
	if err != nil {
		return nil, err
	}
	defer t.close()
	at, err := t.find(unitColumns, 1, false)
	if err != nil {
		return nil, err
	}
	var units []scenarios.Unit
	add := func(_ int, line []byte) error {
		fields, err := splitRow(nil, line)
		if err != nil {
			return err
		}
		if len(fields) != len(t.header) {
			return raggedRow(fields, t.header)
		}
		u := scenarios.NewUnit(string(fields[at[0]]))
		if u.Name == "" {
			return fmt.Errorf("unit is empty: a name is needed")
		}
		for i, limit := range []*int64{&u.MaxISI, &u.FirstISI, &u.MinSilence} {
			column := at[i+1]
			if column < 0 || len(fields[column]) == 0 {
				continue
			}
			ms, err := parseFloat(fields[column])
			if err != nil {
				return fmt.Errorf("%s %w", unitColumns[i+1], err)
			}
			if ms < 0 || ms > 1e9 {
				return fmt.Errorf("%s is %v: milliseconds from 0 to 1e9 are needed", unitColumns[i+1], ms)
			}
			*limit = int64(math.RoundToEven(ms * 1e6))
		}
		if at[4] >= 0 {
			u.CellType = string(fields[at[4]])
		}
		if at[5] >= 0 {
			u.Condition = string(fields[at[5]])
		}
		units = append(units, u)
		return nil
	}
	if err := t.each(add); err != nil {
		return nil, err
	}
	if len(units) == 0 {
		return nil, fmt.Errorf("%s: a header but no units", path)
	}
	return units, nil
}
