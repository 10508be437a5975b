package bench

// Key is one key of a study file, as help texts and messages name it.
type Key struct {
	Table   string // "" at the top, "code" for [[code]]
	Name    string
	Type    KeyType
	Default string // "" where the key is needed or has no value unless given
	Doc     string
}

// KeyType says what a key's value is.
type KeyType uint8

const (
	Text KeyType = iota
	Whole
	Number64
	Switch
	Texts
	Wholes
	Numbers
	Bands
)

// String says what would be right.
func (t KeyType) String() string {
	return [...]string{"text in quotes", "a whole number, 0 or above,", "a number", "true or false", "a list of texts in quotes, such as [\"a\", \"b\"]",
		"a list of whole numbers, such as [1, 10]", "a list of numbers, such as [0, 1]", "a list of upper edges or [low, high] pairs, such as [20, [5, 40]]"}[t]
}

// tables are the tables of a study in their usual order.
var tables = []string{"", "recording", "bursts", "sweep", "code", "estimate"}

// Keys are all keys of a study, in the order of its file.
func Keys() []Key {
	return []Key{
		{"", "title", Text, "", "heads tables and figures"},
		{"", "seed", Whole, "7", "of every random draw; equal seeds give equal results"},

		{"recording", "scenario", Text, "", "a synthetic ensemble by name (paired-drive), in place of files"},
		{"recording", "cells", Whole, "1024", "scenario: how many cells"},
		{"recording", "duration_s", Number64, "300 for a scenario", "length; of files: to the last stream sample + dt unless given"},
		{"recording", "event_rate_hz", Number64, "scenario's own", "scenario: mean events/s of a cell"},
		{"recording", "event_depth", Number64, "scenario's own", "scenario: depth of modulation of the event rate by the first stream"},
		{"recording", "burst_share", Number64, "scenario's own", "scenario: mean share of events that are bursts"},
		{"recording", "burst_depth", Number64, "scenario's own", "scenario: modulation of that share by the second stream"},
		{"recording", "bandwidths_hz", Numbers, "scenario's own", "scenario: cut-off of each stream"},
		{"recording", "spikes", Text, "", "file of spikes (.csv, .npz), relative to the study"},
		{"recording", "streams", Text, "", "file of streams (.csv, .npz), relative to the study; an .npz may hold both"},
		{"recording", "units_table", Text, "none", "file (.csv): unit, then any of max_isi_ms, first_isi_ms, min_silence_ms, cell_type, condition"},
		{"recording", "units", Whole, "those that spike", "how many units were recorded, silent ones included"},
		{"recording", "trials", Text, "segments", "what trials are: segments (fresh input each), cells (each trial of a unit is one more cell under the same input), frozen-repeats (repeats of one input)"},
		{"recording", "drop_outside", Switch, "false", "leave out spikes outside the recording and count them; otherwise they are an error"},

		{"bursts", "max_isi_ms", Number64, "15", "longest interval within a burst; an interval equal to it belongs to the burst"},
		{"bursts", "min_spikes", Whole, "2", "fewest spikes of a burst"},
		{"bursts", "first_isi_ms", Number64, "0", "stricter first interval; 0: as max_isi_ms"},
		{"bursts", "min_silence_ms", Number64, "0", "silence needed before a burst; 0: none"},

		{"sweep", "codes", Texts, "all but the unshrunken fraction", "codes to rank; your own [[code]]s and members of pairs are added"},
		{"sweep", "pairs", Texts, `["event-rate+burst-fraction"]`, "codes read together, joined by +"},
		{"sweep", "cells", Wholes, "1, 2, 4, … up to all", "ensemble sizes"},
		{"sweep", "bands_hz", Bands, "each stream's own", "upper edges of bands, or [low, high]"},
		{"sweep", "input_bandwidths_hz", Numbers, "none", "scenario: draw the streams anew with each of these cut-offs"},
		{"sweep", "draws", Whole, "20", "random sub-ensembles for each size"},
		{"sweep", "bin_ms", Number64, "1", "width of a time bin"},
		{"sweep", "fraction_window_ms", Number64, "0", "sliding window of ratios; 0: at most 1/(4 × highest band edge), stated"},
		{"sweep", "fraction_prior", Number64, "16", "events by which a ratio is drawn toward its baseline"},

		{"code", "name", Text, "", "of your own code"},
		{"code", "weights", Numbers, "", "weights of events of 1, 2, 3, … spikes; the last holds for longer ones"},
		{"code", "over", Numbers, "none", "the same for a divisor"},

		{"estimate", "with", Texts, `["multitaper", "welch", "plug-in"]`, "estimators; the first that is spectral is the primary one"},
		{"estimate", "segment_ms", Number64, "0", "length of a segment; 0: chosen and stated"},
		{"estimate", "overlap", Number64, "0.5", "welch: share of a segment that the next one shares"},
		{"estimate", "window", Text, "hann", "welch: hann or boxcar"},
		{"estimate", "half_bandwidth", Number64, "0", "multitaper: time-half-bandwidth product NW; 0: chosen and stated"},
		{"estimate", "align", Switch, "true", "estimate the delay of the codes behind each stream, remove it and state it"},
		{"estimate", "confidence", Number64, "0.95", "of intervals; tests reject at 1 − confidence"},
	}
}

// Place is the key as messages name it: "title", "[sweep] draws", "[[code]] over".
func (k Key) Place() string { return place(k.Table, k.Name) }

func place(table, name string) string {
	switch {
	case table == "":
		return name
	case name == "":
		return bracket(table)
	}
	return bracket(table) + " " + name
}

func bracket(table string) string {
	if table == "code" {
		return "[[code]]"
	}
	return "[" + table + "]"
}
