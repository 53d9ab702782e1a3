// Package version names the release.
package version

// Number is the release that records and help texts carry.
const Number = "0.1.0"
