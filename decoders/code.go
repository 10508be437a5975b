package decoders

import (
	"fmt"
	"math"
	"strings"
	"unicode"
)

// Trains are the six basic trains that every code is read from, each a count by
// bin: all spikes at their own times, events of 1, 2, 3 and ≥ 4 spikes at their
// first spike, and Σ p̄ᵢEᵢ, the events weighted by their unit's own burst share.
const Trains = 6

// Code names one signal of an ensemble. It is a sum of weights over event sizes,
// each event at its first spike; with Over set, that sum over another one, both
// taken in a sliding window.
type Code struct {
	Name     string
	Describe string
	// Weights of events of 1, 2, 3 and ≥ 4 spikes.
	Weights [4]float64
	// Over are the weights of the divisor. All zero: no division.
	Over [4]float64
	// Spikes reads every spike at its own time, in place of events.
	Spikes bool
	// OwnBaseline subtracts each unit's own burst share of its events.
	OwnBaseline bool
	// Shrink draws a ratio toward its baseline where events are few.
	Shrink bool
}

var (
	allEvents = [4]float64{1, 1, 1, 1}
	allBursts = [4]float64{0, 1, 1, 1}
)

// BuiltIn are the codes that need no definition, in the order in which they are
// listed. Each call returns values of its own.
func BuiltIn() []Code {
	return []Code{
		{Name: "spike-rate", Describe: "all spikes", Spikes: true},
		{Name: "event-rate", Describe: "isolated spikes and bursts, each counted once at its first spike", Weights: allEvents},
		{Name: "singlet-rate", Describe: "isolated spikes", Weights: [4]float64{1, 0, 0, 0}},
		{Name: "burst-rate", Describe: "bursts, each counted once at its first spike", Weights: allBursts},
		{Name: "burst-fraction", Describe: "bursts over events in a sliding window, shrunken toward the baseline where events are few", Weights: allBursts, Over: allEvents, Shrink: true},
		{Name: "burst-fraction-raw", Describe: "bursts over events in a sliding window; the baseline where there are no events", Weights: allBursts, Over: allEvents},
		{Name: "burst-residual", Describe: "bursts less each unit's own burst share of its events", Weights: allBursts, OwnBaseline: true},
		{Name: "burst-size", Describe: "spikes a burst in a sliding window (four for longer ones), shrunken toward the baseline where bursts are few", Weights: [4]float64{0, 2, 3, 4}, Over: allBursts, Shrink: true},
	}
}

// FromWeights is a user's own code: one to four weights by event size, of which
// the last holds for longer events, optionally over another such list. Ratios
// are shrunken toward their baseline. The error names the key of the study.
func FromWeights(name string, weights, over []float64) (Code, error) {
	if name == "" {
		return Code{}, fmt.Errorf("[[code]] without a name: give it one")
	}
	if strings.ContainsFunc(name, func(r rune) bool { return r == '+' || !unicode.IsPrint(r) || unicode.IsSpace(r) }) {
		return Code{}, fmt.Errorf("[[code]] name = %q: a name has no spaces and no + (which joins pairs)", name)
	}
	for _, c := range BuiltIn() {
		if c.Name == name {
			return Code{}, fmt.Errorf("[[code]] name = %q: a built-in code has this name; choose another", name)
		}
	}
	c := Code{Name: name}
	var err error
	if c.Weights, err = bySize(name, "weights", weights); err != nil {
		return Code{}, err
	}
	c.Describe = "events of 1, 2, 3, ≥ 4 spikes weighted " + list(c.Weights)
	if len(over) == 0 {
		return c, nil
	}
	if c.Over, err = bySize(name, "over", over); err != nil {
		return Code{}, err
	}
	for _, v := range c.Over {
		if v < 0 {
			return Code{}, fmt.Errorf("[[code]] %s: over = %s: a divisor with negative weights can vanish; use weights of 0 and above", name, list(c.Over))
		}
	}
	c.Shrink = true
	c.Describe += " over the same weighted " + list(c.Over) + " in a sliding window, shrunken toward the baseline where the divisor is small"
	return c, nil
}

// bySize spreads a list of weights over the four sizes.
func bySize(name, key string, list []float64) (w [4]float64, err error) {
	if len(list) < 1 || len(list) > 4 {
		return w, fmt.Errorf("[[code]] %s: %s has %d numbers: give one to four, for events of 1, 2, 3 and ≥ 4 spikes (the last holds for longer ones)", name, key, len(list))
	}
	for i := range w {
		w[i] = list[min(i, len(list)-1)]
		if math.IsNaN(w[i]) || math.IsInf(w[i], 0) {
			return w, fmt.Errorf("[[code]] %s: %s has a number that is not finite", name, key)
		}
	}
	if w == [4]float64{} {
		return w, fmt.Errorf("[[code]] %s: %s is all zeros: give some event size a weight", name, key)
	}
	return w, nil
}

func list(w [4]float64) string {
	return fmt.Sprintf("%g, %g, %g, %g", w[0], w[1], w[2], w[3])
}

// Linear reports whether the code is a sum over trains, without division.
func (c Code) Linear() bool { return c.Over == [4]float64{} }

// Trains are a linear code's weights over the six basic trains: spikes, events
// of 1, 2, 3 and ≥ 4 spikes, own baseline × events. It panics on a ratio.
func (c Code) Trains() [Trains]float64 {
	if !c.Linear() {
		panic("decoders: train weights of the ratio code " + c.Name)
	}
	if c.Spikes {
		return [Trains]float64{1}
	}
	w := [Trains]float64{0, c.Weights[0], c.Weights[1], c.Weights[2], c.Weights[3]}
	if c.OwnBaseline {
		w[5] = -1
	}
	return w
}

// Prior is the strength κ, in units of the divisor, with which a ratio is drawn
// toward its baseline: (num + κ·base)/(den + κ). It is 0 where the code is not
// shrunken.
func (c Code) Prior(kappa float64) float64 {
	if c.Shrink {
		return kappa
	}
	return 0
}
