package report

import (
	"bytes"
	"os"
	"testing"
)

func TestTry(t *testing.T) {
	for _, w := range []int{80, 60, 120} {
		for n, d := range documents() {
			var b bytes.Buffer
			if err := Text(&b, d, TextOptions{Width: w}); err != nil {
				t.Fatal(err)
			}
			os.WriteFile("/tmp/rep-"+n+"-"+[]string{60: "60", 80: "80", 120: "120"}[w]+".txt", b.Bytes(), 0o644)
		}
	}
}
