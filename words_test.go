package main

import (
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

// TestVocabularyOfLayers keeps each layer to its own subject: the kernel does not know magnetics, the computing
// packages do not know documents.
func TestVocabularyOfLayers(t *testing.T) {
	for folder, words := range map[string]*regexp.Regexp{
		"kernel":  regexp.MustCompile(`(?i)\b(flux|winding|reluctance)\b`),
		"magcirc": regexp.MustCompile(`(?i)\b(notebook|html|svg)\b`),
	} {
		err := filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
				return err
			}
			text, err := os.ReadFile(path)
			if err != nil {
				return err
			}
			for i, line := range strings.Split(string(text), "\n") {
				if w := words.FindString(line); w != "" {
					t.Errorf("%s:%d: the word %q does not belong in %s", path, i+1, w, folder)
				}
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
}
