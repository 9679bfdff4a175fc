package storage

import (
	"bufio"
	"context"
	"errors"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// killedImport is the environment variable that makes the test binary import
// an upload and nothing else: "PATH ID".
const killedImport = "SPILLWAY_TEST_IMPORT"

func TestMain(m *testing.M) {
	if task := os.Getenv(killedImport); task != "" {
		path, id, _ := strings.Cut(task, "|")
		n, err := strconv.ParseInt(id, 10, 64)
		if err != nil {
			panic(err)
		}
		s, err := Open(context.Background(), path, clock)
		if err != nil {
			panic(err)
		}
		_, err = os.Stdout.WriteString("begun\n")
		if err == nil {
			_, err = s.Accept(context.Background(), UploadID(n), "killed", nil)
		}
		if err != nil {
			panic(err)
		}
		os.Exit(0)
	}
	os.Exit(m.Run())
}

// TestKilledImportLeavesNothingHalf kills a process with SIGKILL at random
// moments of an import. Afterwards the file is whole, there is no half batch,
// and the upload is still there to be accepted.
func TestKilledImportLeavesNothingHalf(t *testing.T) {
	ctx := context.Background()
	path := filepath.Join(t.TempDir(), "killed.db")
	s, err := Open(ctx, path, clock)
	if err != nil {
		t.Fatal(err)
	}
	u, err := s.CreateUpload(ctx, "quarter.csv", "harbour", strings.NewReader(quarter(60_000, 0)), 1<<30)
	if err != nil {
		t.Fatal(err)
	}
	if err := s.SavePlan(ctx, u.ID, quarterPlan); err != nil {
		t.Fatal(err)
	}
	if err := s.Close(); err != nil {
		t.Fatal(err)
	}
	random := rand.New(rand.NewPCG(1, uint64(time.Now().UnixNano())))
	killed := 0
	for range 12 {
		command := exec.Command(os.Args[0], "-test.run=^$")
		command.Env = append(os.Environ(), killedImport+"="+path+"|"+strconv.FormatInt(int64(u.ID), 10))
		out, err := command.StdoutPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := command.Start(); err != nil {
			t.Fatal(err)
		}
		if line, err := bufio.NewReader(out).ReadString('\n'); line != "begun\n" {
			t.Fatalf("the import says %q, %v", line, err)
		}
		time.Sleep(time.Duration(random.IntN(250)) * time.Millisecond)
		if err := command.Process.Kill(); err != nil && !errors.Is(err, os.ErrProcessDone) {
			t.Fatal(err)
		}
		if command.Wait() == nil {
			break // it was quicker: the batch is whole, and there is nothing left to kill
		}
		killed++
		inspectAfterKill(t, path, u.ID)
	}
	if killed == 0 {
		t.Fatal("no import was killed: the test has shown nothing")
	}
	s, err = Open(ctx, path, clock)
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	batches, err := s.Batches(ctx)
	if err != nil {
		t.Fatal(err)
	}
	if len(batches) == 0 {
		if _, err := s.Accept(ctx, u.ID, "at last", nil); err != nil {
			t.Fatal(err)
		}
		if batches, err = s.Batches(ctx); err != nil {
			t.Fatal(err)
		}
	}
	if len(batches) != 1 || batches[0].Accepted != 60_000 {
		t.Errorf("batches %+v", batches)
	}
}

// inspectAfterKill checks what must hold whenever the process died.
func inspectAfterKill(t *testing.T, path string, id UploadID) {
	t.Helper()
	ctx := context.Background()
	s, err := Open(ctx, path, clock)
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	var whole string
	if err := s.writer.QueryRow("pragma integrity_check").Scan(&whole); err != nil || whole != "ok" {
		t.Fatalf("integrity: %s, %v", whole, err)
	}
	var batches, claims, chunks, rejected int
	if err := s.writer.QueryRow(`select (select count(*) from batches), (select count(*) from claims),
		(select count(*) from claim_columns), (select count(*) from rejected_rows)`).Scan(&batches, &claims, &chunks, &rejected); err != nil {
		t.Fatal(err)
	}
	if batches == 0 && claims+chunks+rejected > 0 || batches == 1 && claims != 60_000 || batches > 1 {
		t.Fatalf("half a batch: %d batches, %d claims, %d chunks, %d rejected rows", batches, claims, chunks, rejected)
	}
	u, err := s.Upload(ctx, id)
	if err != nil {
		t.Fatal(err)
	}
	if f, _, err := s.OpenFile(u.SHA256); err != nil {
		t.Fatal(err)
	} else {
		f.Close()
	}
}
