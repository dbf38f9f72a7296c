package session_test

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"testing"

	"ampturn/dsl/session"
)

// The digest is that of the three letters in FIPS 180-2, appendix B.1.
const abcDigest = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"

func TestReadFileNotesTheSource(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "bh.csv"), []byte("abc"), 0o600); err != nil {
		t.Fatal(err)
	}
	session.SetFolder(dir)
	defer session.SetFolder("")
	session.Reset()
	for range 2 {
		if data, err := session.ReadFile("./bh.csv"); err != nil || string(data) != "abc" {
			t.Fatalf("%q, %v", data, err)
		}
	}
	session.Rest(session.Source{Kind: "seed", Name: "spread", Value: "7"})
	got := session.Sources()
	if len(got) != 2 || got[0] != (session.Source{Kind: session.DataFile, Name: "bh.csv", Value: abcDigest}) || got[1].Value != "7" {
		t.Errorf("sources: %v", got)
	}
	session.Reset()
	if got := session.Sources(); len(got) != 0 {
		t.Errorf("a fresh notebook rests on %v", got)
	}
}

func TestReadFileStaysInTheFolder(t *testing.T) {
	dir := t.TempDir()
	inside := filepath.Join(dir, "inside")
	if err := os.Mkdir(inside, 0o700); err != nil {
		t.Fatal(err)
	}
	secret := filepath.Join(dir, "secret.csv")
	if err := os.WriteFile(secret, []byte("x"), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(secret, filepath.Join(inside, "link.csv")); err != nil {
		t.Skip("no links here: ", err)
	}
	session.SetFolder(inside)
	defer session.SetFolder("")
	for _, name := range []string{"../secret.csv", secret, "link.csv", `..\secret.csv`, "a/../../secret.csv"} {
		if _, err := session.ReadFile(name); err == nil {
			t.Errorf("%s was read", name)
		}
	}
	if _, err := session.ReadFile("none.csv"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a file that is not there: %v", err)
	}
}
