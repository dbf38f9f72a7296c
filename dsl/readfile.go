package dsl

import (
	"bytes"
	"errors"
	"io/fs"
	"path/filepath"
	"strings"
	"syscall"

	"ampturn/dsl/session"
	"ampturn/magcirc"
	"ampturn/magcirc/datafile"
	"ampturn/magcirc/hyst"
	"ampturn/magcirc/material"
)

// CurveData is a measured magnetisation curve, read from a file. It is a [Law].
type CurveData struct {
	bound  boundLaw
	points *datafile.Points
}

// ReadCurve reads a magnetisation curve from a file beside the notebook. Its first line names columns and units, H in
// A/m, kA/m or oersted, B in T, mT or gauss:
//
//	H (A/m), B (mT)
//	50, 150
//	100, 260
//
//	lot := NewMaterial("lot 12", ReadCurve("bh.csv"))
func ReadCurve(file string) *CurveData {
	p := readPoints(file)
	return &CurveData{boundLaw{must(material.Points{Source: file, FirstRow: p.First, H: p.H, B: p.B}.Law())}, p}
}

// FieldStrengths are the field strengths of the points.
func (c *CurveData) FieldStrengths() []AmperePerMetre {
	c.given()
	return append([]float64(nil), c.points.H...)
}

// FluxDensities are the flux densities of the points.
func (c *CurveData) FluxDensities() []Tesla { c.given(); return append([]float64(nil), c.points.B...) }

func (c *CurveData) below() material.Law { c.given(); return c.bound.law }

func (c *CurveData) given() {
	if c == nil || c.points == nil {
		refuse(magcirc.BadValue, "curve", "there is none", `read it with ReadCurve("bh.csv")`)
	}
}

// FluxDensity is the flux density at a field strength.
func (c *CurveData) FluxDensity(field AmperePerMetre) Tesla {
	c.given()
	return c.bound.FluxDensity(field)
}

// MIMEBundle shows the curve in words.
func (c *CurveData) MIMEBundle() map[string]any {
	if c == nil || c.points == nil {
		return nil
	}
	return c.bound.MIMEBundle()
}

// ReadLoop reads a measured loop from a file beside the notebook: one steady cycle, with columns as [ReadCurve] takes
// them. A drift of B over the cycle is taken out and noted.
func ReadLoop(file string) *Loop {
	p := readPoints(file)
	return &Loop{loop: must(hyst.NewLoop(file, p.H, p.B)), name: file}
}

// readPoints reads a file of the notebook's folder.
func readPoints(file string) *datafile.Points {
	return must(datafile.ReadPoints(file, bytes.NewReader(readBeside(file))))
}

// readBeside reads a file of the notebook's folder or below, and no other. The notebook's provenance names it.
func readBeside(file string) []byte {
	if strings.TrimSpace(file) == "" {
		refuse(magcirc.BadValue, "file", "there is no name", `write ReadLoop("loop.csv")`)
	}
	if !filepath.IsLocal(file) {
		refuse(magcirc.BadFile, file, "is outside the notebook's folder", "put the file beside the notebook")
	}
	data, err := session.ReadFile(file)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		refuse(magcirc.BadFile, file, "is not there", "put the file beside the notebook")
	case errors.Is(err, syscall.EISDIR):
		refuse(magcirc.BadFile, file, "is no file", "name a file beside the notebook")
	case err != nil:
		refuse(magcirc.BadFile, file, "cannot be read", "put a readable file beside the notebook")
	}
	return data
}
