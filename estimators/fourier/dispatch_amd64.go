//go:build amd64 && !purego

package fourier

import "golang.org/x/sys/cpu"

//go:generate go -C asm run . -out ../kernel_amd64.s -stubs ../kernel_amd64.go -pkg fourier

// vector tells whether the vector kernels may run. Tests turn it off.
var vector = cpu.X86.HasAVX2

func radix2(re, im, twiddles []float64) {
	if !vector {
		radix2Portable(re, im, twiddles)
		return
	}
	radix2AVX2(&re[0], &im[0], &twiddles[0], len(re)/2)
}

func radix4(re, im []float64, s *stage) {
	if !vector {
		radix4Portable(re, im, s)
		return
	}
	radix4AVX2(&re[0], &im[0], &s.twiddles[0], s.quarter, len(re)/(4*s.quarter))
}

func last16(re, im, twiddles []float64) {
	if !vector {
		last16Portable(re, im, twiddles)
		return
	}
	last16AVX2(&re[0], &im[0], &twiddles[0], len(re)/16)
}

func weigh(dst, x, w []float64, mean float64) {
	whole := 0
	if vector {
		whole = len(x) &^ 3
	}
	if whole > 0 {
		weighAVX2(&dst[0], &x[0], &w[0], whole, mean)
	}
	weighPortable(dst[whole:], x[whole:], w[whole:], mean)
}
