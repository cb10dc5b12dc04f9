// Package numeric holds the arithmetic under the rules: orthonormal bases,
// distributions, statistics of residuals, and the refits that remedies need.
// Everything works on plain slices of float64. Nothing here knows of tables,
// rows of a file, or wording, and nothing draws chance but from a stream that
// the caller hands in.
//
// Unless a comment says otherwise, inputs are left as they are, a NaN among
// the inputs gives NaN, and lengths that do not fit together are a broken
// promise between callers: the function panics with its name and both lengths.
package numeric
