// Package chart draws charts in the house look: lines over one axis, bars, limits as hatched bands with their words.
// It knows series, axes and limits, and nothing of what they stand for.
//
// A chart is a value; [Chart.SVG] gives a self-contained picture without a background of its own, readable on light
// and dark ground and in grey print (each line has its own dash), [Chart.Text] says the same in words. The same chart
// gives the same bytes.
package chart
