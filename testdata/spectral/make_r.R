# Golden smoothed cross-spectrum of monthly deaths from lung diseases in the UK
# (Diggle 1990, in R's datasets). Run: Rscript make_r.R > spec_pgram.csv
# pad brings the 72 months to 128 samples; no taper, no trend, mean removed.
x <- ts.union(mdeaths, fdeaths)
s <- spec.pgram(x, kernel = kernel("daniell", 4), taper = 0, detrend = FALSE, demean = TRUE,
                pad = 0.7778, fast = FALSE, plot = FALSE)
cat("#", R.version.string, "\n")
write.csv(data.frame(freq = s$freq, coh = s$coh[, 1], phase = s$phase[, 1], spec1 = s$spec[, 1], spec2 = s$spec[, 2]),
          row.names = FALSE)
cat("# mdeaths", as.numeric(mdeaths), "\n")
cat("# fdeaths", as.numeric(fdeaths), "\n")
