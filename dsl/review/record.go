package review

import "math"

// Entry is one row of the table of verdicts for programs: what two revisions are compared by.
type Entry struct {
	What   string  // name of the limit, the requirement or the open point
	Corner string  // case that it belongs to; "" for none
	Where  string  // corner and conditions in words
	Value  float64 // in SI; NaN where there is none
	Unit   string  // SI unit of the value
	Limit  string  // the rule in words
	Margin float64 // to the limit, in the unit of the value, negative where it is missed; NaN where there is none
	Status string  // the status word, with what belongs to it
}

// Entries lists the verdicts of the notebook in the order of their table.
func Entries() []Entry {
	var all []Entry
	for _, e := range ledger.cells {
		for _, item := range e.items {
			switch item := item.(type) {
			case *Verdict:
				all = append(all, item.entry(item.What))
			case *Requirement:
				for _, v := range item.checks {
					all = append(all, v.entry(item.What))
				}
				if len(item.checks) == 0 {
					all = append(all, Entry{What: item.What, Value: math.NaN(), Limit: item.Rule.String(), Margin: math.NaN(), Status: item.row().words})
				}
			case *OpenPoint:
				all = append(all, Entry{What: item.What, Where: "for " + item.Owner, Value: math.NaN(), Margin: math.NaN(), Status: item.row().words})
			}
		}
	}
	return all
}

func (v *Verdict) entry(what string) Entry {
	return Entry{What: what, Corner: v.Corner, Where: v.Where(), Value: v.Value, Unit: known(v.unit()), Limit: v.Rule.String(),
		Margin: v.Rule.Margin(v.Value), Status: v.StatusWords()}
}
