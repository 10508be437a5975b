package files

import (
	"math"
	"math/big"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"codeassay/scenarios"
)

// The digits alone give what the way through float64 gives.
func TestNanosecondsFromDigits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.OneOf(
			rapid.StringMatching(`-?[0-9]{0,6}\.[0-9]{0,9}`),
			rapid.StringMatching(`-?[0-9]{1,8}(\.[0-9]{1,18})?`),
			rapid.StringMatching(`[+-]?[0-9]{1,3}(\.[0-9]{0,12})?([eE][+-]?[0-9])?`),
			rapid.StringMatching(`[0-9.,eE+-]{0,6}`),
		).Draw(t, "text")
		got, err := parseNanoseconds([]byte(text))
		want, refused := strconv.ParseFloat(text, 64)
		if refused != nil || math.Abs(want) >= 4e9 {
			assert.Error(t, err)
			return
		}
		require.NoError(t, err)
		assert.Equal(t, scenarios.Nanoseconds(want), got)
	})
}

// Against exact arithmetic: the result is the nearest integer wherever the digits
// are no further than 0.2 ns from it, below 1e6 s.
func TestNanosecondsAreExact(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		ns := rapid.Int64Range(-999_999_999_999_999, 999_999_999_999_999).Draw(t, "ns")
		exact := new(big.Rat).SetFrac64(ns, 1e9)
		got, err := parseNanoseconds([]byte(exact.FloatString(9)))
		require.NoError(t, err)
		assert.Equal(t, ns, got)
		exact.Add(exact, big.NewRat(int64(rapid.IntRange(-2, 2).Draw(t, "off")), 1e10))
		got, err = parseNanoseconds([]byte(exact.FloatString(12)))
		require.NoError(t, err)
		assert.Equal(t, ns, got)
	})
}

func TestTiesGoToEven(t *testing.T) {
	// 0.5, 1.5 and 2.5 ns: seconds below 1e-8 have steps far below 0.1 ns.
	for text, want := range map[string]int64{"0.0000000005": 0, "0.0000000015": 2, "0.0000000025": 2, "-0.0000000015": -2} {
		got, err := parseNanoseconds([]byte(text))
		require.NoError(t, err)
		assert.Equal(t, want, got, text)
	}
}

func TestAppendSeconds(t *testing.T) {
	for ns, want := range map[int64]string{0: "0", 1: "0.000000001", 1_500_000_000: "1.5", 60_000_000_000: "60", 100_000_020: "0.10000002"} {
		assert.Equal(t, want, string(appendSeconds(nil, ns)))
	}
	rapid.Check(t, func(t *rapid.T) {
		ns := rapid.Int64Range(0, 1<<50).Draw(t, "ns")
		got, err := parseNanoseconds(appendSeconds(nil, ns))
		require.NoError(t, err)
		assert.Equal(t, ns, got)
	})
}

func TestDecimals(t *testing.T) {
	for text, want := range map[string]int{"12": 0, "0.25": 2, "1e-05": 5, "1.5E-3": 4, "1.25e1": 1, "2e3": 0, ".5": 1} {
		assert.Equal(t, want, decimals([]byte(text)), text)
	}
}
