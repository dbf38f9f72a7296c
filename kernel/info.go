package kernel

import (
	"context"

	"ampturn/kernel/wire"
)

type languageInfo struct {
	Name      string `json:"name"`
	Version   string `json:"version"`
	MIMEType  string `json:"mimetype"`
	Extension string `json:"file_extension"`
	Lexer     string `json:"pygments_lexer,omitempty"`
	Mirror    string `json:"codemirror_mode,omitempty"`
}

type infoReply struct {
	Status    string       `json:"status"`
	Protocol  string       `json:"protocol_version"`
	Name      string       `json:"implementation"`
	Version   string       `json:"implementation_version"`
	Language  languageInfo `json:"language_info"`
	Banner    string       `json:"banner"`
	Links     []HelpLink   `json:"help_links"`
	Debugger  bool         `json:"debugger"`
	Supported []string     `json:"supported_features"`
}

// info answers kernel_info_request, on control also while a cell runs.
func (k *Kernel) info(_ context.Context, r *request) {
	r.around(&struct{}{}, func() any {
		l := k.engine.Language()
		return infoReply{
			Status:   "ok",
			Protocol: wire.Version,
			Name:     k.opt.Name,
			Version:  k.opt.Version,
			Language: languageInfo{
				Name: l.Name, Version: l.Version, MIMEType: l.MIMEType, Extension: l.Extension,
				Lexer: l.Lexer, Mirror: l.Mirror,
			},
			Banner:    l.Banner,
			Links:     append([]HelpLink{}, k.opt.Links...),
			Supported: []string{},
		}
	})
}
