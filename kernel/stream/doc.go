// Package stream makes messages of the text that a cell prints.
//
// A [Writer] gathers what is printed within a short time into one message, so that a loop of prints costs a few
// messages and not thousands. It folds lines that are overwritten by a carriage return, cuts long text into messages
// of a bounded size, slows a cell down to what front ends take ([Pace]), and stops showing text past a limit: the
// beginning is shown as it comes, the end when the cell ends, with the count of what was left out between.
//
// What front ends take: the servers between kernel and browser drop the output of a cell that sends more than 10^6
// bytes of text or 1000 messages a second, averaged over 3 s (settings iopub_data_rate_limit, iopub_msg_rate_limit
// and rate_limit_window of the notebook server, default values).
package stream
