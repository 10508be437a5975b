package report

import "testing"

func TestTryFigures(t *testing.T) {
	for n, d := range documents() {
		if _, err := Figures("/tmp/figs/"+n, d); err != nil {
			t.Fatal(err)
		}
	}
}
