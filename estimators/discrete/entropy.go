package discrete

import "math"

// Method is a correction of the plug-in entropy for the bias of small samples.
type Method uint8

const (
	// Jackknife leaves each sample out in turn (Zahl 1977, Ecology 58:907–913).
	// It is the default.
	Jackknife Method = iota
	// PlugIn is the entropy of the observed shares, uncorrected.
	PlugIn
	// MillerMadow adds (occupied − 1)/2N nats (Miller 1955, in Quastler (ed.),
	// Information Theory in Psychology, 95–100).
	MillerMadow
	// PanzeriTreves corrects information, not entropy: by the number of relevant
	// response levels of each stimulus, estimated by a Bayes-like count (Panzeri
	// and Treves 1996, Network 7:87–107). As an entropy it is the plug-in.
	PanzeriTreves
)

// Entropy estimates the entropy, in bits, of the distribution that counts were
// drawn from, and the variance of the plug-in estimate, Var(log2 p)/N, in bits².
// Without samples both are 0. It panics on a negative count.
func Entropy(counts []int64, method Method) (bits, variance float64) {
	n, occupied := int64(0), 0
	for _, c := range counts {
		if c < 0 {
			panic("discrete: a negative count")
		}
		n += c
		if c > 0 {
			occupied++
		}
	}
	if n == 0 {
		return 0, 0
	}
	total := float64(n)
	second := 0.0
	for _, c := range counts {
		if c > 0 {
			l := -math.Log(float64(c) / total)
			bits += float64(c) / total * l
			second += float64(c) / total * l * l
		}
	}
	variance = math.Max(0, second-bits*bits) / total / (math.Ln2 * math.Ln2)
	switch method {
	case MillerMadow:
		bits += float64(occupied-1) / (2 * total)
	case Jackknife:
		if n > 1 {
			bits = jackknife(counts, total, bits)
		}
	}
	return bits / math.Ln2, variance
}

// jackknife is N Ĥ − ((N−1)/N) Σ n_i Ĥ_{−i} in nats. Leaving out one sample of
// symbol i only changes its term: with s = Σ n ln n,
// Ĥ = ln N − s/N and Ĥ_{−i} = ln(N−1) − (s − n ln n + (n−1) ln(n−1))/(N−1).
func jackknife(counts []int64, total, plugIn float64) float64 {
	s := 0.0
	for _, c := range counts {
		s += xlogx(float64(c))
	}
	// Σ n_i Ĥ_{−i}, less its value if no term changed, to avoid cancelling.
	change := 0.0
	for _, c := range counts {
		if c > 0 {
			x := float64(c)
			change += x * (xlogx(x) - xlogx(x-1))
		}
	}
	mean := math.Log(total-1) - (s-change/total)/(total-1)
	return total*plugIn - (total-1)*mean
}

func xlogx(x float64) float64 {
	if x <= 0 {
		return 0
	}
	return x * math.Log(x)
}

// Information estimates the information, in bits, between rows and columns:
// H(rows) + H(columns) − H(both), each corrected by the method. It is never
// clipped at zero, and 0 without samples.
func Information(t *Table, method Method) float64 {
	rows, columns := t.marginals()
	if method == PanzeriTreves {
		return Information(t, PlugIn) - panzeriTreves(t, rows, columns)
	}
	r, _ := Entropy(rows, method)
	c, _ := Entropy(columns, method)
	both, _ := Entropy(t.counts, method)
	return r + c - both
}

// panzeriTreves is the bias of the plug-in information in bits:
// [Σ_s (R_s − 1) − (R − 1)]/(2N ln 2), with R_s the relevant columns of row s.
func panzeriTreves(t *Table, rows, columns []int64) float64 {
	n := t.Samples()
	if n == 0 {
		return 0
	}
	possible := 0
	for _, c := range columns {
		if c > 0 {
			possible++
		}
	}
	sum := -float64(possible - 1)
	for s, samples := range rows {
		if samples > 0 {
			sum += relevant(t.counts[s*t.columns:(s+1)*t.columns], possible) - 1
		}
	}
	return sum / (2 * float64(n) * math.Ln2)
}

// relevant is the Bayes-like count of the columns that a row can reach (Panzeri
// and Treves 1996; formula from memory): of the possible columns, the number for
// which the expected occupancy is nearest to the observed one, where x unseen
// columns get probability q₀ = 1 − (N/(N+R₀))^{1/N} each and seen ones
// (1 − x q₀)(n+1)/(N+R₀).
func relevant(counts []int64, possible int) float64 {
	n, seen := 0.0, 0
	for _, c := range counts {
		n += float64(c)
		if c > 0 {
			seen++
		}
	}
	q0 := 1 - math.Pow(n/(n+float64(seen)), 1/n)
	best, nearest := 0, math.Inf(1)
	for x := 0; x <= possible-seen; x++ {
		expected := float64(x) * (1 - math.Pow(1-q0, n))
		for _, c := range counts {
			if c > 0 {
				q := (1 - float64(x)*q0) * (float64(c) + 1) / (n + float64(seen))
				expected += 1 - math.Pow(1-q, n)
			}
		}
		if d := math.Abs(expected - float64(seen)); d < nearest {
			best, nearest = x, d
		}
	}
	return float64(seen + best)
}
