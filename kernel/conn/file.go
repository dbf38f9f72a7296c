package conn

import (
	"encoding/json"
	"fmt"
	"net"
	"os"
	"strconv"

	"ampturn/kernel/wire"
)

// File is a connection file: where the front end expects the five sockets, and the key.
type File struct {
	Transport string `json:"transport"` // "tcp" or "ipc"
	IP        string `json:"ip"`        // ipc: first part of the paths
	Shell     int    `json:"shell_port"`
	IOPub     int    `json:"iopub_port"`
	Stdin     int    `json:"stdin_port"`
	Control   int    `json:"control_port"`
	Heartbeat int    `json:"hb_port"`
	Key       string `json:"key"`
	Scheme    string `json:"signature_scheme"`
	Kernel    string `json:"kernel_name,omitempty"`
}

// maxFile bounds the size of a connection file; a real one has a few hundred bytes.
const maxFile = 1 << 16

// ReadFile reads a connection file.
func ReadFile(path string) (*File, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, fmt.Errorf("connection file: %w", err)
	}
	if info.Size() > maxFile {
		return nil, fmt.Errorf("connection file %s: %d bytes is too long for one", path, info.Size())
	}
	b, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("connection file: %w", err)
	}
	f, err := Parse(b)
	if err != nil {
		return nil, fmt.Errorf("connection file %s: %w", path, err)
	}
	return f, nil
}

// Parse reads the contents of a connection file and fills in defaults: tcp on 127.0.0.1.
func Parse(b []byte) (*File, error) {
	f := new(File)
	if err := json.Unmarshal(b, f); err != nil {
		return nil, err
	}
	if f.Transport == "" {
		f.Transport = "tcp"
	}
	if f.IP == "" {
		f.IP = "127.0.0.1"
	}
	return f, f.check()
}

func (f *File) check() error {
	if f.Transport != "tcp" && f.Transport != "ipc" {
		return fmt.Errorf("transport %q is neither tcp nor ipc", f.Transport)
	}
	if f.Scheme != "" && f.Scheme != wire.Scheme {
		return fmt.Errorf("signature scheme %q is not known; use %s", f.Scheme, wire.Scheme)
	}
	used := make(map[int]string)
	for _, p := range f.ports() {
		if p.port < 1 || p.port > 65535 {
			return fmt.Errorf("%s port %d is not in 1..65535", p.name, p.port)
		}
		if other, twice := used[p.port]; twice {
			return fmt.Errorf("%s and %s share port %d", other, p.name, p.port)
		}
		used[p.port] = p.name
	}
	return nil
}

type namedPort struct {
	name string
	port int
}

func (f *File) ports() []namedPort {
	return []namedPort{
		{"shell", f.Shell}, {"iopub", f.IOPub}, {"stdin", f.Stdin}, {"control", f.Control}, {"heartbeat", f.Heartbeat},
	}
}

// Address gives the network and address of a port, as package net takes them.
func (f *File) Address(port int) (network, address string) {
	if f.Transport == "ipc" {
		return "unix", f.IP + "-" + strconv.Itoa(port)
	}
	host := f.IP
	if host == "*" { // every interface, in ZeroMQ's spelling
		host = ""
	}
	return "tcp", net.JoinHostPort(host, strconv.Itoa(port))
}
