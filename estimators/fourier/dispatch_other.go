//go:build !amd64 || purego

package fourier

// vector is false: there are only the portable kernels. Tests set it in vain.
var vector = false

func radix2(re, im, twiddles []float64)       { radix2Portable(re, im, twiddles) }
func radix4(re, im []float64, s *stage)       { radix4Portable(re, im, s) }
func last16(re, im, twiddles []float64)       { last16Portable(re, im, twiddles) }
func weigh(dst, x, w []float64, mean float64) { weighPortable(dst, x, w, mean) }
