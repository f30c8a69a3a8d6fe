package main

import (
	"errors"
	"os"
	"os/exec"
	"os/signal"
	"path/filepath"
	"strconv"
	"syscall"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"lampbook": main})
}

// scripts is the folder of the scripts and of the scenes that they share.
const scripts = "../../../testdata/script"

// TestScript runs the scripts of testdata/script, one behaviour a file. Each begins in a folder that holds the scenes of
// testdata/script/scenes. Besides testscript's own commands there are
//
//	status N lampbook …         runs lampbook and checks its exit status
//	waitfor FILE                waits until the file exists
//	interrupt N FILE lampbook … runs it, sends an interrupt once FILE exists, and checks the status
//	hangup N FILE lampbook …    the same with the signal of a terminal that closes
//
// With -short, as under the race detector, only those run that say something about threads and signals.
func TestScript(t *testing.T) {
	dir, some := scripts, []string(nil)
	if testing.Short() {
		dir = ""
		for _, name := range []string{"bad_mesh", "interrupt", "lock", "render_first", "render_threads"} {
			some = append(some, filepath.Join(scripts, name+".txtar"))
		}
	}
	testscript.Run(t, testscript.Params{
		Dir:                 dir,
		Files:               some,
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Setup: func(env *testscript.Env) error {
			return os.CopyFS(env.WorkDir, os.DirFS(filepath.Join(scripts, "scenes")))
		},
		Cmds: map[string]func(ts *testscript.TestScript, neg bool, args []string){
			"status":    scriptStatus,
			"waitfor":   scriptWaitFor,
			"interrupt": scriptSignal(os.Interrupt),
			"hangup":    scriptSignal(syscall.SIGHUP),
		},
		Condition: func(name string) (bool, error) {
			switch name {
			case "devfull":
				info, err := os.Stat("/dev/full")
				return err == nil && info.Mode()&os.ModeCharDevice != 0, nil
			case "hangups": // under nohup they are ignored, and the program leaves it so
				return !signal.Ignored(syscall.SIGHUP), nil
			}
			return false, errors.New("unknown condition " + name)
		},
	})
}

// scriptStatus runs a command and compares its exit status.
func scriptStatus(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status N program [argument …]")
	}
	compareStatus(ts, args[0], ts.Exec(args[1], args[2:]...))
}

// patience is how long a script waits for a file at most: a run that is alive makes it far sooner.
const patience = time.Minute

// scriptWaitFor waits until a file exists.
func scriptWaitFor(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: waitfor FILE")
	}
	if !appears(ts.MkAbs(args[0]), nil) {
		ts.Fatalf("%s is not there after %v", args[0], patience)
	}
}

// appears waits until a file exists, the channel says that there is no more hope, or patience ends.
func appears(path string, hopeless <-chan struct{}) bool {
	for start := time.Now(); time.Since(start) < patience; {
		if _, err := os.Stat(path); err == nil {
			return true
		}
		select {
		case <-hopeless:
			return false
		case <-time.After(2 * time.Millisecond):
		}
	}
	return false
}

// scriptSignal makes a command that runs a program until a file exists, sends it a signal and compares its exit status.
func scriptSignal(sent os.Signal) func(ts *testscript.TestScript, neg bool, args []string) {
	return func(ts *testscript.TestScript, neg bool, args []string) {
		if neg || len(args) < 3 {
			ts.Fatalf("usage: interrupt|hangup N FILE program [argument …]")
		}
		cmd := exec.Command(args[2], args[3:]...)
		cmd.Dir = ts.MkAbs(".")
		cmd.Stdout, cmd.Stderr = ts.Stdout(), ts.Stderr()
		ts.Check(cmd.Start())
		var result error
		ended := make(chan struct{})
		go func() {
			result = cmd.Wait()
			close(ended)
		}()
		if !appears(ts.MkAbs(args[1]), ended) {
			_ = cmd.Process.Kill()
			<-ended
			ts.Fatalf("%s never came: %v", args[1], result)
		}
		ts.Check(cmd.Process.Signal(sent))
		select {
		case <-ended:
		case <-time.After(patience):
			_ = cmd.Process.Kill()
			<-ended
			ts.Fatalf("%v did not end it within %v", sent, patience)
		}
		compareStatus(ts, args[0], result)
	}
}

// compareStatus fails the script unless a command ended with the status wanted.
func compareStatus(ts *testscript.TestScript, want string, err error) {
	got := 0
	var exit *exec.ExitError
	if errors.As(err, &exit) {
		got = exit.ExitCode()
	} else {
		ts.Check(err)
	}
	if strconv.Itoa(got) != want {
		ts.Fatalf("exit status %d, want %s", got, want)
	}
}
