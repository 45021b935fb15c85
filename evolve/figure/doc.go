// Package figure draws the history of a tidally heated system as one picture
// for print: stacked panels of eccentricity, heat made and lost, mantle
// temperature, melt fraction and change of semi-major axis over a common time
// axis, with events and observations.
//
// Most callers fill a [History] and call [Draw]; the format follows the file's
// extension, one of [Formats]. A quantity that no body has takes no panel.
//
// Colours are those of Okabe and Ito; bodies also differ by marker and the two
// heats by dash, so that a print in grey still reads. All text is ASCII,
// because the PDF fonts hold no more. Equal input gives equal bytes in every
// format: no file carries a date.
//
// The package computes no physics.
package figure
