package conn_test

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ampturn/kernel/conn"
)

const goodFile = `{"transport":"tcp","ip":"127.0.0.1","shell_port":1001,"iopub_port":1002,"stdin_port":1003,
"control_port":1004,"hb_port":1005,"key":"k","signature_scheme":"hmac-sha256","kernel_name":"x","unknown":[1]}`

func TestParse(t *testing.T) {
	f, err := conn.Parse([]byte(goodFile))
	if err != nil {
		t.Fatal(err)
	}
	if f.Key != "k" || f.Shell != 1001 || f.Heartbeat != 1005 {
		t.Errorf("%+v", f)
	}
	network, address := f.Address(f.Shell)
	if network != "tcp" || address != "127.0.0.1:1001" {
		t.Errorf("%s %s", network, address)
	}
	f.Transport, f.IP = "ipc", "/tmp/s"
	network, address = f.Address(7)
	if network != "unix" || address != "/tmp/s-7" {
		t.Errorf("%s %s", network, address)
	}
	f.Transport, f.IP = "tcp", "::1"
	if _, address = f.Address(7); address != "[::1]:7" {
		t.Error(address)
	}
}

func TestParseRefuses(t *testing.T) {
	for change, want := range map[string]string{
		`"tcp"=>"udp"`:              "transport",
		`1001=>0`:                   "shell port 0",
		`1003=>65536`:               "stdin port 65536",
		`1004=>-4`:                  "control port -4",
		`1005=>1002`:                "iopub and heartbeat share port 1002",
		`1001=>"1001"`:              "shell_port",
		`hmac-sha256=>hmac-md5`:     "signature scheme",
		`"key":"k"=>"key":{}`:       "key",
		`,"unknown":[1]}=>`:         "unexpected end",
		`"hb_port":1005=>"hb":1005`: "heartbeat port 0",
	} {
		from, to, _ := strings.Cut(change, "=>")
		text := strings.Replace(goodFile, from, to, 1)
		if text == goodFile {
			t.Fatalf("%s changes nothing", change)
		}
		if _, err := conn.Parse([]byte(text)); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", change, err)
		}
	}
}

func TestReadFile(t *testing.T) {
	dir := t.TempDir()
	if _, err := conn.ReadFile(filepath.Join(dir, "none")); !os.IsNotExist(unwrapAll(err)) {
		t.Error(err)
	}
	long := filepath.Join(dir, "long")
	if err := os.WriteFile(long, make([]byte, 1<<20), 0o600); err != nil {
		t.Fatal(err)
	}
	if _, err := conn.ReadFile(long); err == nil || !strings.Contains(err.Error(), "too long") {
		t.Error(err)
	}
}

func unwrapAll(err error) error {
	for {
		u, ok := err.(interface{ Unwrap() error })
		if !ok {
			return err
		}
		if _, isPath := err.(*os.PathError); isPath {
			return err
		}
		err = u.Unwrap()
	}
}

func FuzzParse(f *testing.F) {
	f.Add([]byte(goodFile))
	f.Add([]byte(`{}`))
	f.Add([]byte(`{"transport":"ipc","ip":"x"}`))
	f.Fuzz(func(t *testing.T, b []byte) {
		file, err := conn.Parse(b)
		if err != nil {
			return
		}
		for _, p := range []int{file.Shell, file.IOPub, file.Stdin, file.Control, file.Heartbeat} {
			if p < 1 || p > 65535 {
				t.Errorf("port %d is taken", p)
			}
		}
	})
}
