// Command asm writes the AVX2 kernels of package fourier. It does the operations
// of portable.go in the same order on four lanes, without fused multiply-add, so
// that both give the same bits. Run through go generate in the package's folder.
package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	. "github.com/mmcloughlin/avo/reg"
)

func main() {
	ConstraintExpr("amd64,!purego")
	radix2()
	radix4()
	last16()
	weigh()
	Generate()
}

// vec is a complex vector of four lanes.
type vec struct{ re, im VecVirtual }

func load(m Mem) VecVirtual {
	v := YMM()
	VMOVUPD(m, v)
	return v
}

func add(a, b VecVirtual) VecVirtual { v := YMM(); VADDPD(b, a, v); return v }

// sub is a − b.
func sub(a, b VecVirtual) VecVirtual { v := YMM(); VSUBPD(b, a, v); return v }

// turn is x times the twiddle c + i s.
func turn(x vec, c, s VecVirtual) vec {
	rc, is, rs, ic := YMM(), YMM(), YMM(), YMM()
	VMULPD(c, x.re, rc)
	VMULPD(s, x.im, is)
	VMULPD(s, x.re, rs)
	VMULPD(c, x.im, ic)
	return vec{sub(rc, is), add(rs, ic)}
}

// butterfly is the radix-4 step before twiddles.
func butterfly(a, b, c, d vec) (w, x, y, z vec) {
	sum, dif := vec{add(a.re, c.re), add(a.im, c.im)}, vec{sub(a.re, c.re), sub(a.im, c.im)}
	odd, rot := vec{add(b.re, d.re), add(b.im, d.im)}, vec{sub(b.im, d.im), sub(b.re, d.re)}
	w = vec{add(sum.re, odd.re), add(sum.im, odd.im)}
	x = vec{add(dif.re, rot.re), sub(dif.im, rot.im)}
	y = vec{sub(sum.re, odd.re), sub(sum.im, odd.im)}
	z = vec{sub(dif.re, rot.re), add(dif.im, rot.im)}
	return w, x, y, z
}

func radix2() {
	TEXT("radix2AVX2", NOSPLIT, "func(re, im, twiddles *float64, half int)")
	Doc("radix2AVX2 is one radix-2 pass over 2·half values; half is a multiple of 4.")
	re, im, tw, half := Load(Param("re"), GP64()), Load(Param("im"), GP64()), Load(Param("twiddles"), GP64()), Load(Param("half"), GP64())
	step := GP64()
	MOVQ(half, step)
	SHLQ(Imm(3), step)
	Label("radix2loop")
	at := func(p Register) Mem { return Mem{Base: p} }
	far := func(p Register) Mem { return Mem{Base: p, Index: step, Scale: 1} }
	a, b := vec{load(at(re)), load(at(im))}, vec{load(far(re)), load(far(im))}
	c, s := load(at(tw)), load(far(tw))
	VMOVUPD(add(a.re, b.re), at(re))
	VMOVUPD(add(a.im, b.im), at(im))
	y := turn(vec{sub(a.re, b.re), sub(a.im, b.im)}, c, s)
	VMOVUPD(y.re, far(re))
	VMOVUPD(y.im, far(im))
	for _, p := range []Register{re, im, tw} {
		ADDQ(Imm(32), p)
	}
	SUBQ(Imm(4), half)
	JNZ(LabelRef("radix2loop"))
	VZEROUPPER()
	RET()
}

func radix4() {
	TEXT("radix4AVX2", NOSPLIT, "func(re, im, twiddles *float64, quarter, blocks int)")
	Doc("radix4AVX2 is one radix-4 pass over blocks of 4·quarter values; quarter is a multiple of 4.")
	re, im := Load(Param("re"), GP64()), Load(Param("im"), GP64())
	blocks := Load(Param("blocks"), GP64())
	step, step3, step5 := GP64(), GP64(), GP64()
	Load(Param("quarter"), step)
	SHLQ(Imm(3), step)
	LEAQ(Mem{Base: step, Index: step, Scale: 2}, step3)
	LEAQ(Mem{Base: step, Index: step, Scale: 4}, step5)
	tw, left := GP64(), GP64()
	Label("radix4block")
	Load(Param("twiddles"), tw)
	Load(Param("quarter"), left)
	Label("radix4loop")
	at := func(p Register, quarter int) Mem {
		switch quarter {
		case 0:
			return Mem{Base: p}
		case 3:
			return Mem{Base: p, Index: step3, Scale: 1}
		case 5:
			return Mem{Base: p, Index: step5, Scale: 1}
		}
		return Mem{Base: p, Index: step, Scale: uint8(quarter)}
	}
	in := func(q int) vec { return vec{load(at(re, q)), load(at(im, q))} }
	out := func(v vec, q int) { VMOVUPD(v.re, at(re, q)); VMOVUPD(v.im, at(im, q)) }
	w, x, y, z := butterfly(in(0), in(1), in(2), in(3))
	out(w, 0)
	out(turn(x, load(at(tw, 0)), load(at(tw, 1))), 1)
	out(turn(y, load(at(tw, 2)), load(at(tw, 3))), 2)
	out(turn(z, load(at(tw, 4)), load(at(tw, 5))), 3)
	for _, p := range []Register{re, im, tw} {
		ADDQ(Imm(32), p)
	}
	SUBQ(Imm(4), left)
	JNZ(LabelRef("radix4loop"))
	ADDQ(step3, re)
	ADDQ(step3, im)
	SUBQ(Imm(1), blocks)
	JNZ(LabelRef("radix4block"))
	VZEROUPPER()
	RET()
}

// transpose turns four rows of four lanes into columns.
func transpose(a, b, c, d VecVirtual) (w, x, y, z VecVirtual) {
	ab0, ab1, cd0, cd1 := YMM(), YMM(), YMM(), YMM()
	VUNPCKLPD(b, a, ab0)
	VUNPCKHPD(b, a, ab1)
	VUNPCKLPD(d, c, cd0)
	VUNPCKHPD(d, c, cd1)
	w, x, y, z = YMM(), YMM(), YMM(), YMM()
	VPERM2F128(Imm(0x20), cd0, ab0, w)
	VPERM2F128(Imm(0x20), cd1, ab1, x)
	VPERM2F128(Imm(0x31), cd0, ab0, y)
	VPERM2F128(Imm(0x31), cd1, ab1, z)
	return w, x, y, z
}

func last16() {
	TEXT("last16AVX2", NOSPLIT, "func(re, im, twiddles *float64, blocks int)")
	Doc("last16AVX2 finishes blocks of 16 values, leaving each in natural order.")
	re, im, tw, blocks := Load(Param("re"), GP64()), Load(Param("im"), GP64()), Load(Param("twiddles"), GP64()), Load(Param("blocks"), GP64())
	Label("last16loop")
	row := func(p Register, i int) Mem { return Mem{Base: p, Disp: 32 * i} }
	in := func(i int) vec { return vec{load(row(re, i)), load(row(im, i))} }
	w, x, y, z := butterfly(in(0), in(1), in(2), in(3))
	x = turn(x, load(row(tw, 0)), load(row(tw, 1)))
	y = turn(y, load(row(tw, 2)), load(row(tw, 3)))
	z = turn(z, load(row(tw, 4)), load(row(tw, 5)))
	var a, b, c, d vec
	a.re, b.re, c.re, d.re = transpose(w.re, x.re, y.re, z.re)
	a.im, b.im, c.im, d.im = transpose(w.im, x.im, y.im, z.im)
	w, x, y, z = butterfly(a, b, c, d)
	for i, v := range []vec{w, x, y, z} {
		VMOVUPD(v.re, row(re, i))
		VMOVUPD(v.im, row(im, i))
	}
	ADDQ(Imm(128), re)
	ADDQ(Imm(128), im)
	SUBQ(Imm(1), blocks)
	JNZ(LabelRef("last16loop"))
	VZEROUPPER()
	RET()
}

func weigh() {
	TEXT("weighAVX2", NOSPLIT, "func(dst, x, w *float64, n int, mean float64)")
	Doc("weighAVX2 sets dst to (x − mean)·w; n is a positive multiple of 4.")
	dst, x, w, n := Load(Param("dst"), GP64()), Load(Param("x"), GP64()), Load(Param("w"), GP64()), Load(Param("n"), GP64())
	one := Load(Param("mean"), XMM())
	mean := YMM()
	VBROADCASTSD(one, mean)
	Label("weighloop")
	v := sub(load(Mem{Base: x}), mean)
	VMULPD(Mem{Base: w}, v, v)
	VMOVUPD(v, Mem{Base: dst})
	for _, p := range []Register{dst, x, w} {
		ADDQ(Imm(32), p)
	}
	SUBQ(Imm(4), n)
	JNZ(LabelRef("weighloop"))
	VZEROUPPER()
	RET()
}
