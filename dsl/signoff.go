package dsl

import (
	"strings"

	"ampturn/dsl/doc"
	"ampturn/magcirc"
)

// SignOff shows empty fields for those who sign the document: role, name, date, signature. Nobody signs by running it.
//
//	SignOff("designed by", "checked by", "insulation checked by")
func SignOff(roles ...string) *TableView {
	if len(roles) == 0 {
		roles = []string{"designed by", "checked by", "released by"}
	}
	t := doc.Table{Caption: "sign-off", Columns: []doc.Column{{Name: "role"}, {Name: "name"}, {Name: "date"}, {Name: "signature"}}}
	for _, r := range roles {
		if strings.TrimSpace(r) == "" {
			refuse(magcirc.BadValue, "SignOff", "has a role without a name", `write SignOff("designed by", "checked by")`)
		}
		blank := doc.Text(strings.Repeat("_", 16))
		t.Rows = append(t.Rows, []doc.Cell{doc.Text(r), blank, blank, blank})
	}
	return &TableView{table: t}
}
