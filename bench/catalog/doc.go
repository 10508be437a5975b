// Package catalog knows by name which codes, estimators and scenarios exist, and
// turns the names in a study into the things themselves. A name that is not
// known is an error that says which one was probably meant.
package catalog
