// Package bench runs the experiments: it sweeps codes over streams, ensemble
// sizes and bands, ranks them, and reports.
//
// This root package holds what the experiments share: the Study (what the user
// asked for), the Layout of a sweep (which rows there are), a Piece of finished
// work, and the result Document that every table and figure is made from.
// The work itself is done in the packages below it, which import this one and
// not each other: catalog (what exists, by name), sweep (the engine), rank
// (pieces to a ranked Document) and report (a Document to text and figures).
package bench
