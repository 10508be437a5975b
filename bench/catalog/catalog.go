package catalog

import (
	"fmt"
	"strings"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/scenarios"
)

// Entry is something that a study can name, with what it is.
type Entry struct {
	Name, Describe string
}

// Estimators are the names that [estimate] with may list.
func Estimators() []Entry {
	return []Entry{
		{"multitaper", "coherence rate from Slepian tapers over disjoint segments"},
		{"welch", "coherence rate from overlapping windowed segments"},
		{"plug-in", "information of counts in windows, jackknife-corrected"},
		{"plug-in-raw", "the same without correction"},
		{"plug-in-miller-madow", "the same, corrected by the number of occupied cells"},
		{"plug-in-panzeri-treves", "the same, corrected by the estimated number of possible responses"},
	}
}

// BuiltInCodes are the codes that need no definition.
func BuiltInCodes() []Entry {
	var out []Entry
	for _, c := range decoders.BuiltIn() {
		out = append(out, Entry{c.Name, c.Describe})
	}
	return out
}

// Check refuses names in a study that are not in the catalogue. The error is a
// *bench.Fault.
func Check(study bench.Study) error {
	if _, _, err := Codes(study); err != nil {
		return err
	}
	for _, name := range study.Estimate.With {
		if err := known(study, "estimate.with", "estimator", name, names(Estimators())); err != nil {
			return err
		}
	}
	if name := study.Recording.Scenario; name != "" {
		return known(study, "recording.scenario", "scenario", name, names(Scenarios()))
	}
	return nil
}

// Codes returns the codes that a study ranks, and its pairs as indices into
// them. The error is a *bench.Fault.
func Codes(study bench.Study) (codes []decoders.Code, pairs [][2]int, err error) {
	all := map[string]decoders.Code{}
	var have []string
	for _, c := range decoders.BuiltIn() {
		all[c.Name] = c
		have = append(have, c.Name)
	}
	for i, part := range study.Codes {
		c, err := decoders.FromWeights(part.Name, part.Weights, part.Over)
		if err != nil {
			return nil, nil, study.Fault(fmt.Sprintf("code.%d", i), "%s", err)
		}
		all[c.Name] = c
		have = append(have, c.Name)
	}
	for _, pair := range study.Sweep.Pairs { // first: a pair's members are among the codes
		for _, name := range strings.Split(pair, "+") {
			if err := known(study, "sweep.pairs", "code", name, have); err != nil {
				return nil, nil, err
			}
		}
	}
	at := map[string]int{}
	for _, name := range study.Sweep.Codes {
		if err := known(study, "sweep.codes", "code", name, have); err != nil {
			return nil, nil, err
		}
		at[name] = len(codes)
		codes = append(codes, all[name])
	}
	for _, pair := range study.Sweep.Pairs {
		var members [2]int
		a, b, _ := strings.Cut(pair, "+")
		for i, name := range []string{a, b} {
			index, ok := at[name]
			if !ok {
				index = len(codes)
				at[name] = index
				codes = append(codes, all[name])
			}
			members[i] = index
		}
		pairs = append(pairs, members)
	}
	return codes, pairs, nil
}

func names(entries []Entry) []string {
	out := make([]string, len(entries))
	for i, e := range entries {
		out[i] = e.Name
	}
	return out
}

// known refuses a name that is not among the candidates.
func known(study bench.Study, path, what, name string, candidates []string) error {
	for _, c := range candidates {
		if c == name {
			return nil
		}
	}
	table, key, _ := strings.Cut(path, ".")
	hint := "there are " + strings.Join(candidates, ", ")
	if near := scenarios.Nearest(name, candidates); near != "" {
		hint = "did you mean " + near + "?"
	}
	return study.Fault(path, "[%s] %s: unknown %s %q; %s", table, key, what, name, hint)
}
