package main

import (
	"bytes"
	"go/token"

	"golang.org/x/tools/go/gcexportdata"
)

// export writes the export data of what is offered. It holds no positions: they would name the files of the machine
// that built them and change with every comment.
func (p *loaded) export() ([]byte, error) {
	var b bytes.Buffer
	if err := gcexportdata.Write(&b, token.NewFileSet(), p.api); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}
