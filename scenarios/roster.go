package scenarios

import (
	"fmt"
	"slices"
	"strconv"
)

// roster is the units in canonical order and the place of each among them.
type roster struct {
	units []Unit
	place map[string]int
}

// enrol names all units: those in the spike table and the silent ones declared.
func enrol(spec *Spec, table *spikeTable) (*roster, error) {
	spikes := map[string]int{}
	var names []string
	for i, key := range table.keys {
		if _, ok := spikes[key.Unit]; !ok {
			names = append(names, key.Unit)
		}
		spikes[key.Unit] += table.counts[i]
	}
	seen := len(names)
	if spec.UnitCount < 0 || spec.UnitCount > 0 && spec.UnitCount < seen {
		return nil, fmt.Errorf("units = %d, but %s has spikes of %d units: declare at least as many, or leave units out", spec.UnitCount, table.from, seen)
	}
	rows := map[string]Unit{}
	for i, u := range spec.Units {
		if u.Name == "" {
			return nil, fmt.Errorf("%s row %d: the unit has no name", spec.UnitsFrom, spec.UnitsFirstRow+i)
		}
		if _, ok := rows[u.Name]; ok {
			return nil, fmt.Errorf("%s row %d: unit %q appears a second time: keep one row", spec.UnitsFrom, spec.UnitsFirstRow+i, u.Name)
		}
		rows[u.Name] = u
		if _, ok := spikes[u.Name]; ok {
			continue
		}
		if len(names) >= max(spec.UnitCount, seen) {
			return nil, fmt.Errorf("%s row %d: unit %q has no spikes in %s%s: correct its name, or declare silent units with units = %d",
				spec.UnitsFrom, spec.UnitsFirstRow+i, u.Name, table.from, didYouMean(Nearest(u.Name, names[:seen])), max(spec.UnitCount, len(names))+1)
		}
		spikes[u.Name] = 0
		names = append(names, u.Name)
	}
	names = addSilent(names, spec.UnitCount)

	units := make([]Unit, len(names))
	silent := make([]bool, len(names))
	for i, name := range names {
		u, ok := rows[name]
		if !ok {
			u = NewUnit(name)
		}
		units[i], silent[i] = u, spikes[name] == 0
	}
	return inOrder(units, silent), nil
}

// addSilent names declared units that no file names: the numbers missing from
// 0 … count−1 or 1 … count where all names are such numbers, else silent-1 and on.
func addSilent(names []string, count int) []string {
	if len(names) >= count {
		return names
	}
	taken := map[string]bool{}
	low, high, numbers := count, 0, true
	for _, name := range names {
		taken[name] = true
		n, err := strconv.Atoi(name)
		numbers = numbers && err == nil && strconv.Itoa(n) == name
		low, high = min(low, n), max(high, n)
	}
	first, prefix := 0, ""
	if low < 0 || high > count || low == 0 && high == count {
		numbers = false
	}
	if high == count {
		first = 1
	}
	if !numbers {
		first, prefix = 1, "silent-"
	}
	for i := first; len(names) < count; i++ {
		if name := prefix + strconv.Itoa(i); !taken[name] {
			names = append(names, name)
		}
	}
	return names
}

// foldTrials makes every trial of a unit a unit of its own.
func (r *roster) foldTrials(table *spikeTable, trialOf []int, trials []Trial) *roster {
	counts := make([]int, len(r.units)*len(trials))
	for i, key := range table.keys {
		counts[r.place[key.Unit]*len(trials)+trialOf[i]] += table.counts[i]
	}
	var units []Unit
	var silent []bool
	for i, u := range r.units {
		for k, t := range trials {
			cell := u
			cell.Name = pseudoCell(u.Name, t.Number)
			units = append(units, cell)
			silent = append(silent, counts[i*len(trials)+k] == 0)
		}
	}
	return inOrder(units, silent)
}

func pseudoCell(unit string, trial int64) string { return fmt.Sprintf("%s#%d", unit, trial) }

func inOrder(units []Unit, silent []bool) *roster {
	names := make([]string, len(units))
	for i, u := range units {
		names[i] = u.Name
	}
	places := unitPlaces(names)
	order := make([]int, len(units))
	for i := range order {
		order[i] = i
		places[i].silent = silent[i]
	}
	slices.SortFunc(order, func(a, b int) int { return compareUnits(places[a], places[b]) })
	r := &roster{place: make(map[string]int, len(units))}
	for i, o := range order {
		r.units = append(r.units, units[o])
		r.place[units[o].Name] = i
	}
	return r
}
