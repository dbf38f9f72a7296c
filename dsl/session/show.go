package session

import "fmt"

// Shower is a value that shows itself as a MIME bundle; a nil bundle shows nothing.
type Shower interface {
	MIMEBundle() map[string]any
}

// Measured is a value whose display carries metadata beside the bundle: the numbers behind a table in full.
type Measured interface {
	MIMEMetadata() map[string]any
}

// Show displays a value in the middle of a cell: its own bundle, else its text.
func Show(v any) {
	out := Output{Data: map[string]any{"text/plain": fmt.Sprint(v)}}
	if s, ok := v.(Shower); ok {
		out.Data = s.MIMEBundle()
	}
	if m, ok := v.(Measured); ok {
		out.Metadata = m.MIMEMetadata()
	}
	if out.Data != nil {
		send(out)
	}
}

// Display shows a MIME bundle.
func Display(data map[string]any) { send(Output{Data: data}) }

// Place shows a MIME bundle that [Update] can replace later, under a name that is unique in the notebook.
func Place(id string, data map[string]any) { send(Output{Data: data, ID: id}) }

// Update replaces what stands at a place.
func Update(id string, data map[string]any) { send(Output{Data: data, ID: id, Update: true}) }

// PlaceWith is [Place] with metadata beside the bundle.
func PlaceWith(id string, data, metadata map[string]any) {
	send(Output{Data: data, Metadata: metadata, ID: id})
}

// UpdateWith is [Update] with metadata beside the bundle.
func UpdateWith(id string, data, metadata map[string]any) {
	send(Output{Data: data, Metadata: metadata, ID: id, Update: true})
}

// Page shows a MIME bundle beside the notebook, where the front end has a place for it.
func Page(data map[string]any) { send(Output{Data: data, Page: true}) }

// Write sends text to a stream, "stdout" or "stderr".
func Write(stream, text string) { send(Output{Stream: stream, Text: text}) }

// Clear clears the output of the running cell; with wait, when the next output comes.
func Clear(wait bool) { send(Output{Clear: true, Wait: wait}) }

// send hands an output to the sink, outside the lock: a sink may ask for the cell.
func send(out Output) {
	state.Lock()
	sink := state.sink
	state.Unlock()
	if sink != nil {
		sink(out)
	}
}
