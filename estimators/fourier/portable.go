package fourier

// The portable kernels. Products are wrapped in float64 so that no platform fuses
// them with the sum that follows: the same bits everywhere, and the same as the
// vector kernels', which do these operations in this order on four lanes.

// radix2Portable is one radix-2 pass of decimation in frequency.
func radix2Portable(re, im, twiddles []float64) {
	half := len(re) / 2
	r0, r1, i0, i1 := re[:half], re[half:2*half], im[:half], im[half:2*half]
	c, s := twiddles[:half], twiddles[half:2*half]
	for j := range r0 {
		xr, xi := r0[j]-r1[j], i0[j]-i1[j]
		r0[j], i0[j] = r0[j]+r1[j], i0[j]+i1[j]
		r1[j], i1[j] = float64(xr*c[j])-float64(xi*s[j]), float64(xr*s[j])+float64(xi*c[j])
	}
}

// radix4Portable is one radix-4 pass over blocks of 4·quarter values.
func radix4Portable(re, im []float64, s *stage) {
	q := s.quarter
	for at := 0; at < len(re); at += 4 * q {
		block4(re[at:at+4*q], im[at:at+4*q], s.twiddles, q)
	}
}

func block4(re, im, twiddles []float64, q int) {
	r0, r1, r2, r3 := re[:q], re[q:2*q], re[2*q:3*q], re[3*q:4*q]
	i0, i1, i2, i3 := im[:q], im[q:2*q], im[2*q:3*q], im[3*q:4*q]
	c1, s1, c2, s2, c3, s3 := twiddles[:q], twiddles[q:2*q], twiddles[2*q:3*q], twiddles[3*q:4*q], twiddles[4*q:5*q], twiddles[5*q:6*q]
	for j := range r0 {
		sumR, difR := r0[j]+r2[j], r0[j]-r2[j]
		sumI, difI := i0[j]+i2[j], i0[j]-i2[j]
		// −i(b−d) has real part Im(b−d) and imaginary part −Re(b−d).
		oddR, rotI := r1[j]+r3[j], r1[j]-r3[j]
		oddI, rotR := i1[j]+i3[j], i1[j]-i3[j]
		r0[j], i0[j] = sumR+oddR, sumI+oddI
		xr, xi := difR+rotR, difI-rotI
		r1[j], i1[j] = float64(xr*c1[j])-float64(xi*s1[j]), float64(xr*s1[j])+float64(xi*c1[j])
		xr, xi = sumR-oddR, sumI-oddI
		r2[j], i2[j] = float64(xr*c2[j])-float64(xi*s2[j]), float64(xr*s2[j])+float64(xi*c2[j])
		xr, xi = difR-rotR, difI+rotI
		r3[j], i3[j] = float64(xr*c3[j])-float64(xi*s3[j]), float64(xr*s3[j])+float64(xi*c3[j])
	}
}

// last16Portable finishes blocks of 16 values: the pass with quarters of four,
// then four transforms of four values each. Value s of transform r is frequency
// r + 4s of the block, and is left there.
func last16Portable(re, im, twiddles []float64) {
	for at := 0; at < len(re); at += 16 {
		r, i := (*[16]float64)(re[at:at+16]), (*[16]float64)(im[at:at+16])
		block4(r[:], i[:], twiddles, 4)
		a, b := *r, *i
		for k := range 4 {
			sumR, difR := a[4*k]+a[4*k+2], a[4*k]-a[4*k+2]
			sumI, difI := b[4*k]+b[4*k+2], b[4*k]-b[4*k+2]
			oddR, rotI := a[4*k+1]+a[4*k+3], a[4*k+1]-a[4*k+3]
			oddI, rotR := b[4*k+1]+b[4*k+3], b[4*k+1]-b[4*k+3]
			r[k], i[k] = sumR+oddR, sumI+oddI
			r[4+k], i[4+k] = difR+rotR, difI-rotI
			r[8+k], i[8+k] = sumR-oddR, sumI-oddI
			r[12+k], i[12+k] = difR-rotR, difI+rotI
		}
	}
}

// weighPortable sets dst to (x − mean)·w.
func weighPortable(dst, x, w []float64, mean float64) {
	w, dst = w[:len(x)], dst[:len(x)]
	for i, v := range x {
		dst[i] = (v - mean) * w[i]
	}
}
