//go:build !headless

package main

import (
	"context"
	"encoding/json"
	"fmt"
	"image/png"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"quietbus/study"
)

// A desk is a virtual display with a window manager and the built program.
type desk struct {
	t       *testing.T
	display string
	program string
	dir     string // scratch: state file, recovery files, pictures
	shots   string // where pictures go
	cmd     *exec.Cmd
	window  string
}

// newDesk builds the program and starts a display. The test is skipped unless
// QUIETBUS_WINDOW_TEST is set: it needs the packages of .ci/packages test.
func newDesk(t *testing.T, width, height int) *desk {
	if os.Getenv("QUIETBUS_WINDOW_TEST") == "" {
		t.Skip("set QUIETBUS_WINDOW_TEST=1 to drive a true window under Xvfb")
	}
	for _, tool := range []string{"Xvfb", "xdotool", "import", "openbox"} {
		if _, err := exec.LookPath(tool); err != nil {
			t.Fatalf("%s is missing: run .ci/packages test", tool)
		}
	}
	d := &desk{t: t, dir: t.TempDir()}
	if d.shots = os.Getenv("QUIETBUS_SHOTS"); d.shots == "" {
		d.shots = d.dir
	}
	d.program = filepath.Join(d.dir, "quietbus")
	if out, err := exec.Command("go", "build", "-buildvcs=false", "-o", d.program, ".").CombinedOutput(); err != nil {
		t.Fatalf("build: %v\n%s", err, out)
	}
	r, w, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	x := exec.Command("Xvfb", "-displayfd", "3", "-screen", "0", fmt.Sprintf("%dx%dx24", width, height), "-nolisten", "tcp")
	x.ExtraFiles = []*os.File{w}
	d.start(x)
	w.Close()
	number := make([]byte, 16)
	n, err := io.ReadAtLeast(r, number, 2)
	if err != nil {
		t.Fatalf("Xvfb gave no display: %v", err)
	}
	d.display = ":" + strings.TrimSpace(string(number[:n]))
	d.until("the display to answer", func() bool {
		_, err := d.xdo("getdisplaygeometry")
		return err == nil
	})
	wm := exec.Command("openbox")
	wm.Env = append(os.Environ(), "DISPLAY="+d.display)
	d.start(wm)
	return d
}

// start runs a helper until the test ends.
func (d *desk) start(c *exec.Cmd) {
	d.t.Helper()
	if err := c.Start(); err != nil {
		d.t.Fatalf("%s: %v", c.Path, err)
	}
	d.t.Cleanup(func() {
		c.Process.Kill()
		c.Wait()
	})
}

func (d *desk) stateFile() string { return filepath.Join(d.dir, "state.json") }

// open starts the program and waits for its window.
func (d *desk) open(theme string, args ...string) {
	d.t.Helper()
	os.Remove(d.stateFile())
	d.cmd = exec.Command(d.program, args...)
	d.cmd.Dir = ".." // FyneApp.toml, as under make run
	d.cmd.Env = append(os.Environ(), "DISPLAY="+d.display, "LANG=C", "LIBGL_ALWAYS_SOFTWARE=1",
		"FYNE_SCALE=1", "FYNE_THEME="+theme, "QUIETBUS_TIMING=1",
		"XDG_CONFIG_HOME="+filepath.Join(d.dir, "config"), "QUIETBUS_HOME="+filepath.Join(d.dir, "home"), "QUIETBUS_STATE="+d.stateFile())
	d.cmd.Stderr = os.Stderr
	d.start(d.cmd)
	d.until("the window", func() bool {
		out, _ := d.xdo("search", "--onlyvisible", "--pid", strconv.Itoa(d.cmd.Process.Pid))
		ids := strings.Fields(out)
		if len(ids) > 0 {
			d.window = ids[len(ids)-1]
		}
		return d.window != ""
	})
}

// close kills the program as a crash would.
func (d *desk) crash() {
	d.cmd.Process.Kill()
	d.cmd.Wait()
	d.window = ""
}

func (d *desk) xdo(args ...string) (string, error) {
	c := exec.Command("xdotool", args...)
	c.Env = append(os.Environ(), "DISPLAY="+d.display)
	out, err := c.Output()
	return string(out), err
}

// until waits for a condition.
func (d *desk) until(what string, ok func() bool) {
	d.t.Helper()
	for end := time.Now().Add(30 * time.Second); time.Now().Before(end); time.Sleep(50 * time.Millisecond) {
		if ok() {
			return
		}
	}
	d.shot("failed.png")
	data, _ := os.ReadFile(d.stateFile())
	d.t.Fatalf("waited in vain for %s; state: %s", what, data)
}

// state reads what the program says of itself.
func (d *desk) state() (s Report) {
	data, err := os.ReadFile(d.stateFile())
	if err == nil {
		json.Unmarshal(data, &s)
	}
	return s
}

// click moves the mouse to a place of the window and clicks.
func (d *desk) click(at [2]int) {
	d.t.Helper()
	if _, err := d.xdo("mousemove", "--window", d.window, strconv.Itoa(at[0]), strconv.Itoa(at[1])); err != nil {
		d.t.Fatal("mousemove:", err)
	}
	time.Sleep(100 * time.Millisecond)
	d.xdo("click", "1")
}

// shot saves the screen as a picture.
func (d *desk) shot(name string) string {
	path := filepath.Join(d.shots, name)
	os.MkdirAll(d.shots, 0o755)
	c := exec.Command("import", "-window", "root", path)
	c.Env = append(os.Environ(), "DISPLAY="+d.display)
	if out, err := c.CombinedOutput(); err != nil {
		d.t.Errorf("picture %s: %v %s", name, err, out)
	}
	return path
}

// expected returns the verdict of the demo with the named measures on, worked
// out in this process.
func expected(t *testing.T, s *study.Study, on []string) []string {
	t.Helper()
	before, err := study.Evaluate(context.Background(), s, nil)
	if err != nil {
		t.Fatal(err)
	}
	after, err := study.Evaluate(context.Background(), s, on)
	if err != nil {
		t.Fatal(err)
	}
	if len(on) == 0 {
		before = nil // as on the screen: it would repeat itself
	}
	return verdictTexts(before, after)
}

// TestTrueWindow opens the demo in a real window, flips a measure with the
// mouse, reads the changed verdict, takes it back with the keyboard, and finds
// its unsaved work again after a crash.
func TestTrueWindow(t *testing.T) {
	const demo = "testdata/demo.study.json"
	s, err := study.Open(filepath.Join("..", demo))
	if err != nil {
		t.Fatal(err)
	}
	d := newDesk(t, 1280, 800)
	d.open("light", demo)
	d.xdo("windowmove", d.window, "0", "20", "windowsize", d.window, "1280", "778")

	on := s.OnMeasures()
	before := expected(t, s, on)
	d.until("the demo's verdict", func() bool { return slices.Equal(d.state().Verdict, before) })
	time.Sleep(time.Second) // let the resize settle: the switches move with it
	d.look("light.png")

	// A measure whose flip changes the verdict, by our own evaluation.
	var name string
	var next, after []string
	for i := range s.Measures {
		next, _ = s.Switched(on, s.Measures[i].Name)
		if after = expected(t, s, next); !slices.Equal(after, before) {
			name = s.Measures[i].Name
			break
		}
	}
	if name == "" {
		t.Fatal("no measure of the demo changes its verdict")
	}
	at, ok := d.state().Switches[name]
	if !ok {
		t.Fatalf("no switch of %q on screen: %v", name, d.state().Switches)
	}
	d.click(at)
	d.until("the verdict after the flip", func() bool {
		r := d.state()
		return slices.Equal(r.Verdict, after) && sameNames(r.On, next)
	})
	if !d.state().Unsaved {
		t.Error("a flipped measure is not marked as unsaved")
	}
	if title, _ := d.xdo("getwindowname", d.window); !strings.Contains(title, "unsaved") {
		t.Errorf("window title %q does not say that there is unsaved work", title)
	}
	d.look("flipped.png")

	d.xdo("key", "ctrl+z")
	d.until("the verdict after undo", func() bool {
		r := d.state()
		return slices.Equal(r.Verdict, before) && sameNames(r.On, on) && !r.Unsaved
	})
	d.xdo("key", "ctrl+y")
	d.until("the verdict after redo", func() bool { return slices.Equal(d.state().Verdict, after) })

	// The recovery file is written on a routine of its own.
	d.until("the recovery file", func() bool {
		files, _ := filepath.Glob(filepath.Join(d.dir, "home", "unsaved-*.json"))
		return len(files) > 0
	})
	time.Sleep(300 * time.Millisecond)
	d.crash()
	left := Leftovers(filepath.Join(d.dir, "home"))
	if len(left) != 1 || !sameNames(left[0].Study.OnMeasures(), next) {
		t.Fatalf("after a crash %d unsaved studies are found", len(left))
	}
	d.open("dark", demo)
	d.xdo("windowmove", d.window, "0", "20", "windowsize", d.window, "1280", "778")
	d.until("the offer to recover", func() bool { return d.state().Dialog == recoverTitle })
	time.Sleep(time.Second)
	d.xdo("key", "Return")
	d.until("the recovered verdict", func() bool {
		r := d.state()
		return slices.Equal(r.Verdict, after) && r.Unsaved
	})
	time.Sleep(time.Second)
	d.look("dark.png")
}

// look takes a picture and checks that something is drawn on it.
func (d *desk) look(name string) {
	d.t.Helper()
	time.Sleep(500 * time.Millisecond) // the report is written before the frame is painted
	f, err := os.Open(d.shot(name))
	if err != nil {
		d.t.Error(err)
		return
	}
	defer f.Close()
	img, err := png.Decode(f)
	if err != nil {
		d.t.Error(name, err)
		return
	}
	colours := map[[3]uint32]int{}
	b := img.Bounds()
	for y := b.Min.Y; y < b.Max.Y; y += 2 {
		for x := b.Min.X; x < b.Max.X; x += 2 {
			r, g, bl, _ := img.At(x, y).RGBA()
			colours[[3]uint32{r, g, bl}]++
		}
	}
	if len(colours) < 50 {
		d.t.Errorf("%s shows %d colours only: the window is blank", name, len(colours))
	}
}

func sameNames(a, b []string) bool {
	a, b = slices.Clone(a), slices.Clone(b)
	slices.Sort(a)
	slices.Sort(b)
	return slices.Equal(a, b)
}
