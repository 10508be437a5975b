package catalog_test

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench"
	"codeassay/bench/catalog"
	"codeassay/decoders"
)

const files = "[recording]\nspikes = \"s.csv\"\nstreams = \"t.csv\"\n"

func parse(t *testing.T, text string) bench.Study {
	s, err := bench.Parse("study.toml", []byte(text))
	require.NoError(t, err)
	return s
}

func TestDefaultsAreInTheCatalogue(t *testing.T) {
	demo := bench.Demo()
	assert.NoError(t, catalog.Check(demo))
	codes, pairs, err := catalog.Codes(demo)
	require.NoError(t, err)
	assert.Len(t, codes, 7)
	require.Len(t, pairs, 1)
	assert.Equal(t, "event-rate", codes[pairs[0][0]].Name)
	assert.Equal(t, "burst-fraction", codes[pairs[0][1]].Name)
}

func TestUsersOwnCode(t *testing.T) {
	s := parse(t, files+"[sweep]\ncodes = [\"spike-rate\"]\npairs = [\"spike-rate+doublets\"]\n[[code]]\nname = \"doublets\"\nweights = [0, 1, 0]\n")
	codes, pairs, err := catalog.Codes(s)
	require.NoError(t, err)
	require.Len(t, codes, 2)
	assert.Equal(t, decoders.Code{Name: "doublets", Describe: codes[1].Describe, Weights: [4]float64{0, 1, 0, 0}}, codes[1])
	assert.Equal(t, [][2]int{{0, 1}}, pairs)
}

func TestUnknownNames(t *testing.T) {
	for text, want := range map[string]string{
		files + "[sweep]\ncodes = [\"burst-fractoin\"]": `study.toml:5: [sweep] codes: unknown code "burst-fractoin"; did you mean burst-fraction?`,
		files + "[sweep]\ncodes = [\"zzz\"]": `study.toml:5: [sweep] codes: unknown code "zzz"; there are spike-rate, event-rate, singlet-rate, burst-rate, ` +
			`burst-fraction, burst-fraction-raw, burst-residual, burst-size`,
		files + "[sweep]\npairs = [\"event-rate+brust-rate\"]": `study.toml:5: [sweep] pairs: unknown code "brust-rate"; did you mean burst-rate?`,
		files + "[estimate]\nwith = [\"multi-taper\"]":         `study.toml:5: [estimate] with: unknown estimator "multi-taper"; did you mean multitaper?`,
		"[recording]\nscenario = \"paired-drives\"":            `study.toml:2: [recording] scenario: unknown scenario "paired-drives"; did you mean paired-drive?`,
	} {
		assert.EqualError(t, catalog.Check(parse(t, text)), want)
	}
}

func TestScenario(t *testing.T) {
	s := parse(t, "[recording]\nscenario = \"paired-drive\"\ncells = 3\nduration_s = 10\nbandwidths_hz = [12]\nevent_depth = 0.125")
	p, err := catalog.Scenario(s)
	require.NoError(t, err)
	assert.Len(t, p.Units(), 3)
	in := catalog.InForce(p)
	assert.Equal(t, []float64{12, 12}, in.BandwidthsHz)
	assert.Equal(t, 0.125, in.EventDepth)
	assert.Equal(t, catalog.PairedDrive, in.Name)

	again, err := catalog.Scenario(s)
	require.NoError(t, err)
	assert.Equal(t, p.Train(nil, 2, 0), again.Train(nil, 2, 0))
	s.Seed++
	other, err := catalog.Scenario(s)
	require.NoError(t, err)
	assert.NotEqual(t, p.Train(nil, 2, 0), other.Train(nil, 2, 0))

	for text, want := range map[string]string{
		"event_depth = 0.9":            `study.toml:3: [recording] event_depth = 0.9: from 0 to 0.3`,
		"bandwidths_hz = [1, 2, 3]":    `study.toml:3: [recording] bandwidths_hz has 3 cut-offs: one for each of the two streams, or one for both`,
		"bandwidths_hz = [20.0, 5000]": `study.toml:3: [recording] bandwidths_hz = 5000`,
	} {
		_, err := catalog.Scenario(parse(t, "[recording]\nscenario = \"paired-drive\"\n"+text))
		assert.ErrorContains(t, err, want)
	}
}

func TestEveryEntrySaysWhatItIs(t *testing.T) {
	for _, list := range [][]catalog.Entry{catalog.BuiltInCodes(), catalog.Estimators(), catalog.Scenarios()} {
		for _, e := range list {
			assert.NotEmpty(t, e.Name)
			assert.NotEmpty(t, e.Describe)
		}
	}
}
