// Package discrete estimates entropy and information from counts.
//
// Quantise two signals to a few levels (Levels), count how often each pair of
// levels meets (Tabulate), and read the information between them off the joint
// table (Information), corrected for the upward bias that limited counts bring:
//
//	rows, columns := make([]uint8, len(stream)), make([]uint8, len(response))
//	r, _ := discrete.Levels(rows, stream, 8)
//	c, _ := discrete.Levels(columns, response, 8)
//	t := discrete.NewTable(r, c)
//	discrete.Tabulate(t, rows, columns)
//	bits := discrete.Information(t, discrete.Jackknife)
//
// Every entropy and information is in bits, every variance in bits², and none is
// clipped at zero: a corrected information of independent signals is negative
// half of the time, and clipping would bias averages. Variances take the samples
// for independent; where they are correlated in time, delete blocks of a table
// (Table.Subtract) and use a delete-a-group jackknife.
//
// Without correction, the information of an R × C table of N samples is too high
// by about (R−1)(C−1)/(2N ln 2) bits (Miller 1955, in Quastler (ed.), Information
// Theory in Psychology, 95–100). Table.Sampling says whether the samples suffice.
package discrete
