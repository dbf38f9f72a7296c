package wire_test

import (
	"bytes"
	"encoding/hex"
	"encoding/json"
	"errors"
	"strings"
	"testing"
	"time"

	"ampturn/kernel/wire"
)

func session(t testing.TB, key string) *wire.Session {
	t.Helper()
	s, err := wire.NewSigner(wire.Scheme, key)
	if err != nil {
		t.Fatal(err)
	}
	return wire.NewSession(s, "user")
}

// RFC 4231, test cases 2 and 3: HMAC-SHA-256 of one key and text each. Case 2's text is given in four parts, as the
// four frames of a message are.
func TestSignature(t *testing.T) {
	for _, c := range []struct {
		key   string
		parts []string
		want  string
	}{
		{"Jefe", []string{"what do ", "ya want ", "for ", "nothing?"}, "5bdcc146bf60754e6a042426089575c75a003f089d2739839dec58b964ec3843"},
		{strings.Repeat("\xaa", 20), []string{strings.Repeat("\xdd", 50)}, "773ea91e36800e46854db8ebd09181a72959098b3ef8c122d9635514ced565fe"},
	} {
		s, err := wire.NewSigner("", c.key)
		if err != nil {
			t.Fatal(err)
		}
		var parts [][]byte
		for _, p := range c.parts {
			parts = append(parts, []byte(p))
		}
		if got := string(s.Sign(parts...)); got != c.want {
			t.Errorf("signature %s, want %s", got, c.want)
		}
		for _, sig := range []string{c.want, strings.ToUpper(c.want)} {
			if !s.Check([]byte(sig), parts...) {
				t.Errorf("%s is refused", sig)
			}
		}
		for _, sig := range []string{"", "zz", c.want[:62], c.want + "00", strings.Repeat("0", 64), "x" + c.want[1:]} {
			if s.Check([]byte(sig), parts...) {
				t.Errorf("%q passes", sig)
			}
		}
	}
	if _, err := wire.NewSigner("hmac-md5", "k"); err == nil {
		t.Error("another scheme is taken")
	}
}

func TestRoundTrip(t *testing.T) {
	for _, key := range []string{"secret", ""} {
		out, in := session(t, key), session(t, key)
		sent := &wire.Message{
			Identities: [][]byte{[]byte("a"), {}},
			Header:     out.Header("execute_request"),
			Parent:     json.RawMessage(`{"msg_id":"p","extra":[1]}`),
			Content:    json.RawMessage(`{"code":"1<2 & Ω"}`),
			Buffers:    [][]byte{{0, 255}, {}},
		}
		frames, err := out.Encode(sent)
		if err != nil {
			t.Fatal(err)
		}
		got, err := in.Decode(frames)
		if err != nil {
			t.Fatal(err)
		}
		if got.Header != sent.Header {
			t.Errorf("header %+v", got.Header)
		}
		if string(got.Parent) != string(sent.Parent) || string(got.Content) != string(sent.Content) || string(got.Metadata) != "{}" {
			t.Errorf("parts %s %s %s", got.Parent, got.Content, got.Metadata)
		}
		if len(got.Identities) != 2 || len(got.Buffers) != 2 || !bytes.Equal(got.Buffers[0], []byte{0, 255}) {
			t.Errorf("prefix %q, buffers %q", got.Identities, got.Buffers)
		}
		_, err = in.Decode(frames)
		if want := key != ""; errors.Is(err, wire.ErrReplay) != want {
			t.Errorf("key %q, replay: %v", key, err)
		}
	}
}

func TestHeader(t *testing.T) {
	s := session(t, "k")
	a, b := s.Header("x"), s.Header("x")
	if a.ID == b.ID || a.Session != b.Session || a.Session != s.ID || s.ID == session(t, "k").ID {
		t.Errorf("ids %+v %+v", a, b)
	}
	d, err := time.Parse(time.RFC3339Nano, a.Date)
	if err != nil || time.Since(d).Abs() > time.Minute {
		t.Errorf("date %q: %v", a.Date, err)
	}
}

func TestDecodeRefuses(t *testing.T) {
	signer, err := wire.NewSigner("", "k")
	if err != nil {
		t.Fatal(err)
	}
	in := session(t, "k")
	head := `{"msg_id":"a","msg_type":"t","session":"s"}`
	for name, parts := range map[string][]string{
		"three parts":        {head, "{}", "{}"},
		"header not JSON":    {"{", "{}", "{}", "{}"},
		"header empty":       {"{}", "{}", "{}", "{}"},
		"header an array":    {"[]", "{}", "{}", "{}"},
		"header null":        {"null", "{}", "{}", "{}"},
		"type a number":      {`{"msg_id":"a","msg_type":7}`, "{}", "{}", "{}"},
		"content not JSON":   {head, "{}", "{}", "nope"},
		"content an array":   {head, "{}", "{}", "[1]"},
		"content null":       {head, "{}", "{}", "null"},
		"content twice":      {head, "{}", "{}", "{}{}"},
		"content a NaN":      {head, "{}", "{}", `{"x":NaN}`},
		"parent a string":    {head, `"x"`, "{}", "{}"},
		"metadata empty":     {head, "{}", "", "{}"},
		"not UTF-8":          {"\xff\xfe", "{}", "{}", "{}"},
		"not UTF-8 in parts": {head, "{}", "{}", "{\"a\":\"\xff\"}"},
		"too deep":           {head, "{}", "{}", `{"code":` + strings.Repeat("[", 20000) + strings.Repeat("]", 20000) + "}"},
	} {
		var b [][]byte
		for _, p := range parts {
			b = append(b, []byte(p))
		}
		frames := append([][]byte{[]byte("id"), []byte(wire.Delimiter), signer.Sign(b...)}, b...)
		if _, err := in.Decode(frames); err == nil {
			t.Errorf("%s is taken", name)
		}
	}
	for _, frames := range [][][]byte{nil, {{}}, {[]byte(wire.Delimiter)}, {[]byte(wire.Delimiter), []byte("x")}} {
		if _, err := in.Decode(frames); err == nil {
			t.Errorf("%q is taken", frames)
		}
	}
}

// A message whose content is changed after signing is refused, whichever byte it is.
func TestTampering(t *testing.T) {
	out, in := session(t, "k"), session(t, "k")
	frames, err := out.Encode(&wire.Message{Header: out.Header("t"), Content: json.RawMessage(`{"code":"1"}`)})
	if err != nil {
		t.Fatal(err)
	}
	for f := 1; f < len(frames); f++ {
		for i := range frames[f] {
			frames[f][i] ^= 1
			if _, err := in.Decode(frames); err == nil {
				t.Errorf("frame %d, byte %d", f, i)
			}
			frames[f][i] ^= 1
		}
	}
	if _, err := in.Decode(frames); err != nil {
		t.Error(err)
	}
}

func FuzzDecode(f *testing.F) {
	out := session(f, "")
	frames, err := out.Encode(&wire.Message{
		Identities: [][]byte{[]byte("id")}, Header: out.Header("execute_request"), Content: json.RawMessage(`{"code":"1"}`),
	})
	if err != nil {
		f.Fatal(err)
	}
	f.Add(bytes.Join(frames, []byte{0}))
	f.Add([]byte("\x00\x00"))
	f.Add([]byte("<IDS|MSG>\x00\x00{}\x00{}\x00{}\x00{}"))
	f.Fuzz(func(t *testing.T, data []byte) {
		m, err := session(t, "").Decode(bytes.Split(data, []byte{0}))
		if err != nil {
			return
		}
		// Whatever is taken can be sent as the parent of an answer and is read again as the same.
		again, err := out.Encode(&wire.Message{Header: out.Header("reply"), Parent: m.Raw, Content: m.Content})
		if err != nil {
			t.Fatal(err)
		}
		back, err := session(t, "").Decode(again)
		if err != nil {
			t.Fatalf("answer to %s: %v", hex.EncodeToString(data), err)
		}
		if !bytes.Equal(back.Parent, m.Raw) || !bytes.Equal(back.Content, m.Content) {
			t.Errorf("%s became %s", m.Raw, back.Parent)
		}
	})
}
