// Package synthetic generates ensembles whose information is known.
//
// A scenario is one file: its settings, its generator and a Truth. It draws its
// streams and spike trains from a seed, unit by unit, so that the first 256 cells
// of 1024 are the same as those of 256. Its truth is stated apart, as the spectra
// of its size-resolved trains; what a code carries is derived from them elsewhere,
// and never travels with a recording.
//
// # Events with marks
//
// Truth covers every ensemble of equal cells, independent given the streams, whose
// events have a size that depends on the second stream alone, y. With A(t) the
// intensity of a cell's events and q_k(t) = q̄_k + q′_k y(t) the probability of
// size k, the trains of sizes k and l of two cells share, and have in common with
// the streams (H: response of A to the first stream, x; ∗: convolution over f)
//
//	shared_kl = q̄_k q̄_l S_A + q′_k q′_l (r² S_yy + S_A ∗ S_yy)
//	cross_kx  = q̄_k H S_xx,   cross_ky = q′_k r S_yy,
//
// S_A being the spectrum of A and r its mean: the product A·y adds S_A ∗ S_yy. If
// a cell's events alone have the private spectrum r + G (G = 0 for Poisson cells),
// marking them independently of each other leaves
//
//	private_kl = δ_kl r q̄_k + q̄_k q̄_l G + q′_k q′_l (G ∗ S_yy).
//
// Spikes after the first are delayed copies of it. In-burst intervals U have the
// characteristic function φ = E e^{−2πifU}, so that an event of k spikes has the
// mean transform K_k = 1 + φ + … + φ^{k−1}, which turns each matrix above into that
// of all spikes; two spikes of one event, j intervals apart, contribute φ^j, and so
// one event E|Σ e^{…}|² in place of |K_k|² (Bartlett 1963, J. R. Stat. Soc. B
// 25:264–296). The spectra of an ensemble of N cells are N private + N² shared; its
// cross-spectra with streams are N cross. Without dead time this is the residual's
// N r p(1−p) + N² r² b² [S_yy + a² S_xx ∗ S_yy] and the event rate's N r + N² r² a²
// S_xx. Derived here, verified by simulation.
//
// # Events with a dead time
//
// Given x, the intensity is A(t) = λ(t)[1 − ∫_{t−τ}^t A] with λ = λ₀(1 + a x), for
// the events in a window as long as the dead time τ exclude each other. With β̂ the
// transform of the window, D = 1 + λ₀β̂, d̂ = 1/D, ĝ = β̂/D and r₀ = λ₀/(1 + λ₀τ),
//
//	A₁ = a r₀ d∗x
//	A₂ = −λ₀ a² r₀ d∗[x·(g∗x)]
//	A₃ = λ₀² a³ r₀ d∗[x·(g∗[x·(g∗x)])].
//
// A₁ is the linear response (Cox 1962, Renewal Theory; Franklin and Bair 1995, SIAM
// J. Appl. Math. 55:1074–1093). For Gaussian x of autocorrelation R, A₂ is noise
// that all cells share, of spectrum
//
//	(λ₀ a² r₀)² |d̂|² ∫ S(ν) S(f−ν) [|ĝ(ν)|² + ĝ(ν) ĝ*(f−ν)] dν,
//
// and moves the mean rate by −λ₀ a² r₀ m/D(0), m = ∫ S ĝ. The part of A₃ that
// follows x multiplies the gain by 1 + λ₀² a² [ĝ(0) m + ĝ (gR)^ + (gC)^], where C(s)
// correlates x(t) with (g∗x)(t−s): the three ways to pair off two of three Gaussian
// factors.
//
// A cell's events differ from A by n(t) with n = −λ (β∗n) + M, where M has
// independent increments of variance A dt, so its private spectrum is that of
// L A L†, L = (1 + λ β∗)⁻¹ = d − λ₀ a d x g + λ₀² a² d x g x g − …, averaged over x:
//
//	|d̂|² {r + a² r₀ [λ₀² ∫ S(ν) |ĝ(f−ν)|² dν + 2 λ₀² Re ĝ (gR)^ − 2 λ₀ Re ∫ S(ν) d̂*(ν) ĝ(f−ν) dν]},
//
// at rest the renewal spectrum r₀/|D|². Left out are terms of relative order a⁴.
// Derived here, verified by simulation.
package synthetic
