// Package files reads recordings from a lab's files and writes them.
//
// Read opens the spikes, the streams and the optional units table, whatever
// their containers are, checks the form of each, and ends in scenarios.New, which
// checks the content: so every container gives the same recording. WriteCSV and
// WriteNPZ write what Read reads back unchanged.
//
// Comma-separated text: rows are numbered as a spreadsheet does, the header is
// row 1. Fields may stand in double quotes. Line ends may be LF or CRLF, a
// byte-order mark and gzip compression are seen through.
//
//	spikes.csv   unit,time_s[,trial][,event]   event: first, inner or single
//	streams.csv  time_s,NAME,NAME…[,trial]
//	units.csv    unit[,max_isi_ms][,first_isi_ms][,min_silence_ms][,cell_type][,condition]
//
// NumPy archives (.npz, stored or deflated): rows are numbered from 0.
//
//	unit          integers, one a spike
//	time_s        float32 or float64
//	trial         integers, optional
//	event         1 first, 2 inner, 3 single; optional
//	dt_s          one number: the sample interval of the streams
//	start_s       optional: time of the first sample, one or one for each trial
//	stream_NAME   numbers, all trials one after another
//	stream_trial  integers, one a sample, optional; in an archive of streams
//	              alone it may be called trial
//
// Spikes and streams may share one archive. Memory is bounded by the spikes: 8
// bytes each where an archive is already sorted by unit, trial and time, some 17
// for text, up to 28 for an archive in another order (44 if its trials change
// from row to row).
package files
