package report

import (
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"

	"codeassay/bench"
)

// rounded is a ticker of about five round numbers.
type rounded struct{}

// Ticks implements plot.Ticker.
func (rounded) Ticks(low, high float64) []plot.Tick {
	if !(high > low) {
		return []plot.Tick{{Value: low, Label: trimmed(bench.Number(low), 3)}}
	}
	step := math.Pow(10, math.Floor(math.Log10((high-low)/4)))
	for _, m := range []float64{5, 2.5, 2} {
		if (high-low)/(m*step) >= 4 {
			step *= m
			break
		}
	}
	decimals := 0
	for decimals < 12 && math.Abs(step*math.Pow(10, float64(decimals))-math.Round(step*math.Pow(10, float64(decimals)))) > 1e-6 {
		decimals++
	}
	var out []plot.Tick
	for i := math.Ceil(low/step - 1e-9); i*step <= high+1e-9*step; i++ {
		out = append(out, plot.Tick{Value: i * step, Label: strings.Replace(fixed(bench.Number(i*step), decimals), "-", "−", 1)})
	}
	return out
}

// given is a ticker at stated values.
type given []plot.Tick

// Ticks implements plot.Ticker.
func (g given) Ticks(low, high float64) []plot.Tick { return g }

// logTicks puts ticks at values on a logarithmic axis of so long a span from low
// to high; labels that would touch are left out, never the first or the last.
func logTicks(values []float64, low, high float64, length vg.Length) given {
	style := lettering(smallSize)
	out := make(given, len(values))
	at := func(i int) vg.Length {
		return length * vg.Length(math.Log(values[i]/low)/math.Log(high/low))
	}
	name := func(i int) string { return strconv.FormatFloat(values[i], 'f', -1, 64) }
	apart := func(i, j int) bool {
		return at(j)-at(i) >= (style.Width(name(i))+style.Width(name(j)))/2+3
	}
	last := len(values) - 1
	shown := -1
	for i := range values {
		out[i].Value = values[i]
		if i == 0 || i == last || apart(shown, i) && apart(i, last) {
			out[i].Label, shown = name(i), i
		}
	}
	return out
}

// ranged is the extent of values, with a margin, that holds low and high.
type ranged struct{ low, high float64 }

func (r *ranged) hold(x bench.Number) {
	if x.Known() {
		r.low, r.high = math.Min(r.low, float64(x)), math.Max(r.high, float64(x))
	}
}
