package notebook

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"maps"
	"math"
	"slices"
)

// Record is what a run leaves in the notebook for programs: which cells ran with which outputs, what the numbers rest
// on, and the verdicts. It stands in the metadata under "ampturn".
type Record struct {
	Cells      []CellMark `json:"cells,omitempty"`
	Provenance []Named    `json:"provenance,omitempty"` // program, libraries, seeds
	Files      []Named    `json:"files,omitempty"`      // data files by name, with the SHA-256 of their bytes
	Verdicts   []Verdict  `json:"verdicts,omitempty"`
}

// Named is a value with its name.
type Named struct {
	Name  string `json:"name"`
	Value string `json:"value"`
}

// CellMark tells a code cell as it was when it ran.
type CellMark struct {
	ID      string `json:"id"`
	Source  string `json:"source"`  // hash of its source
	Outputs string `json:"outputs"` // hash of the texts and pictures that it showed
}

// Verdict is one row of what a notebook judges.
type Verdict struct {
	What   string   `json:"what"`             // what is judged
	Corner string   `json:"corner,omitempty"` // case that it belongs to
	Where  string   `json:"where,omitempty"`  // conditions in words
	Value  *float64 `json:"value,omitempty"`  // in the unit; nil: there is none
	Unit   string   `json:"unit,omitempty"`
	Limit  string   `json:"limit,omitempty"`
	Margin *float64 `json:"margin,omitempty"` // in the unit; negative where the limit is missed
	Status string   `json:"status"`
}

// Finite gives a pointer to a number, nil for one that is not finite.
func Finite(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}

const recordKey = "ampturn"

// Record gives what the last run left; nil: nothing.
func (nb *Notebook) Record() *Record {
	value, ok := nb.Metadata[recordKey]
	if !ok {
		return nil
	}
	text, err := json.Marshal(value)
	if err != nil {
		return nil
	}
	r := &Record{}
	if json.Unmarshal(text, r) != nil {
		return nil // not of this program: another record under the same name
	}
	return r
}

// SetRecord leaves a record in the notebook and marks its cells as they are now.
func (nb *Notebook) SetRecord(r Record) {
	nb.nameCells()
	r.Cells = nil
	for _, c := range nb.Cells {
		if c.Kind == Code && c.Count > 0 {
			r.Cells = append(r.Cells, c.Mark())
		}
	}
	if nb.Metadata == nil {
		nb.Metadata = map[string]any{}
	}
	nb.Metadata[recordKey] = settleValue(r)
}

// Mark tells the cell as it is now.
func (c *Cell) Mark() CellMark {
	h := sha256.New()
	part := func(s string) {
		length := [8]byte{}
		for i, n := 0, len(s); i < len(length); i, n = i+1, n>>8 {
			length[i] = byte(n)
		}
		h.Write(length[:])
		h.Write([]byte(s))
	}
	for _, o := range c.Outputs {
		part(string(o.Kind))
		part(o.Name + "\x00" + o.Fault + "\x00" + o.Text)
		for _, kind := range slices.Sorted(maps.Keys(o.Data)) {
			if text, ok := o.Data[kind].(string); ok {
				part(kind)
				part(text)
			}
		}
	}
	source := sha256.Sum256([]byte(c.Source))
	return CellMark{ID: c.ID, Source: hex.EncodeToString(source[:8]), Outputs: hex.EncodeToString(h.Sum(nil)[:8])}
}
