package register_test

import (
	"database/sql"
	"fmt"
	"net"
	"os"
	"os/exec"
	"os/user"
	"path/filepath"
	"strconv"
	"sync"
	"syscall"
	"testing"
	"time"
)

// server is a PostgreSQL server that the tests start once, on a port of its own.
var server struct {
	sync.Once
	url       string // of its maintenance database
	skip      string // why there is none
	err       error
	stop      func()
	databases int
}

func TestMain(m *testing.M) {
	code := m.Run()
	if server.stop != nil {
		server.stop()
	}
	os.Exit(code)
}

// postgres is the URL of a new database; the test is skipped where no server binary is installed.
func postgres(t *testing.T) string {
	t.Helper()
	server.Do(startServer)
	if server.skip != "" {
		t.Skip(server.skip)
	}
	if server.err != nil {
		t.Fatal(server.err)
	}
	db, err := sql.Open("pgx", server.url)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	server.databases++
	name := fmt.Sprintf("register%d", server.databases)
	if _, err := db.Exec("CREATE DATABASE " + name); err != nil {
		t.Fatal(err)
	}
	return server.url[:len(server.url)-len("postgres")] + name
}

func startServer() {
	initdb, err1 := findBinary("initdb")
	postgres, err2 := findBinary("postgres")
	if err1 != nil || err2 != nil {
		server.skip = "no PostgreSQL server is installed (initdb, postgres)"
		return
	}
	server.err = func() error {
		dir, err := os.MkdirTemp("", "register-postgres-")
		if err != nil {
			return err
		}
		who, err := serverUser(dir)
		if err != nil {
			return err
		}
		run := func(name string, args ...string) *exec.Cmd {
			c := exec.Command(name, args...)
			c.Dir = dir
			c.SysProcAttr = &syscall.SysProcAttr{Credential: who}
			return c
		}
		data := filepath.Join(dir, "data")
		if out, err := run(initdb, "-D", data, "-U", "register", "-A", "trust", "--no-sync", "-E", "UTF8", "--locale=C").CombinedOutput(); err != nil {
			return fmt.Errorf("initdb: %w\n%s", err, out)
		}
		port, err := freePort()
		if err != nil {
			return err
		}
		c := run(postgres, "-D", data, "-p", strconv.Itoa(port), "-c", "listen_addresses=127.0.0.1", "-c", "unix_socket_directories=", "-c", "fsync=off")
		if err := c.Start(); err != nil {
			return err
		}
		server.stop = func() {
			c.Process.Signal(syscall.SIGINT)
			c.Wait()
			os.RemoveAll(dir)
		}
		server.url = fmt.Sprintf("postgres://register@127.0.0.1:%d/postgres", port)
		return await(server.url)
	}()
}

// findBinary looks on the path and where Debian puts the server.
func findBinary(name string) (string, error) {
	if path, err := exec.LookPath(name); err == nil {
		return path, nil
	}
	found, err := filepath.Glob("/usr/lib/postgresql/*/bin/" + name)
	if err == nil && len(found) == 0 {
		err = os.ErrNotExist
	}
	if err != nil {
		return "", err
	}
	return found[len(found)-1], nil
}

// serverUser hands the folder to a user that is not root, because the server refuses to run as root; nil when the test itself is not.
func serverUser(dir string) (*syscall.Credential, error) {
	if os.Getuid() != 0 {
		return nil, nil
	}
	u, err := user.Lookup("postgres")
	if err != nil {
		return nil, err
	}
	uid, err := strconv.Atoi(u.Uid)
	if err != nil {
		return nil, err
	}
	gid, err := strconv.Atoi(u.Gid)
	if err != nil {
		return nil, err
	}
	return &syscall.Credential{Uid: uint32(uid), Gid: uint32(gid)}, os.Chown(dir, uid, gid)
}

func freePort() (int, error) {
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		return 0, err
	}
	defer l.Close()
	return l.Addr().(*net.TCPAddr).Port, nil
}

// await waits until the server answers.
func await(url string) error {
	db, err := sql.Open("pgx", url)
	if err != nil {
		return err
	}
	defer db.Close()
	for range 200 {
		if err = db.Ping(); err == nil {
			return nil
		}
		time.Sleep(50 * time.Millisecond)
	}
	return fmt.Errorf("the PostgreSQL server does not answer: %w", err)
}
