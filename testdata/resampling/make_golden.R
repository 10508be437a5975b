# Golden values for estimators/resampling. Run: Rscript make_golden.R > golden.csv
# Source: R's p.adjust, binom.test, prop.test (Wilson's interval without
# continuity correction), qt and pgamma. One case a line: kind, arguments, results.
set.seed(20261201)
put <- function(kind, ...) cat(paste(c(kind, trimws(formatC(c(...), digits = 17, format = "g"))), collapse = ","), "\n", sep = "")
cat("#", R.version.string, "\n")
cases <- list(
  c(.0001, .0004, .0019, .0095, .0201, .0278, .0298, .0344, .0459, .3240, .4262, .5719, .6528, .7590, 1),
  runif(7), c(.01, .01, .03, .03, .5, .5), c(.04), c(0, 1e-300, 1, 1), runif(40)^4)
for (p in cases) {
  put("holm", p, p.adjust(p, "holm"))
  put("bh", p, p.adjust(p, "BH"))
}
for (k in list(c(0, 1), c(1, 1), c(0, 20), c(15, 148), c(81, 263), c(1999, 2000), c(103, 2000), c(7, 1000000)))
  for (level in c(.9, .95, .999)) {
    put("exact", k, level, binom.test(k[1], k[2], conf.level = level)$conf.int)
    put("wilson", k, level, suppressWarnings(prop.test(k[1], k[2], conf.level = level, correct = FALSE))$conf.int)
  }
for (dof in c(1, 2, 2.7, 5, 14.3, 99, 1e4, 1e7, Inf))
  for (level in c(.5, .683, .95, .999)) put("t", dof, level, qt(.5 + level / 2, dof))
for (shape in c(.05, .5, 1, 3, 30, 300, 5000, 1e6))
  for (sds in c(-3, -.5, 0, .5, 2, 5, 10, 30)) {
    x <- shape + sds * sqrt(shape)
    if (x > 0) put("gamma", shape, x, pgamma(x, shape, lower.tail = FALSE))
  }
for (logp in c(-50, -200, -500, -690)) for (shape in c(.05, 1, 30, 5000))
  put("gamma", shape, qgamma(logp, shape, lower.tail = FALSE, log.p = TRUE), exp(logp))
