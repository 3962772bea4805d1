package cli

import (
	"strings"
	"testing"

	"sixdown/xover"
)

// FuzzStartDriver: whatever is said of a driver and called a title, start either says what is wrong in one line,
// or writes a design file that reads back with that title and that driver.
func FuzzStartDriver(f *testing.F) {
	for _, seed := range []string{
		"woofer=8ohm", "tweeter=re:5.4ohm,le:0.04mH,fs:850Hz,qms:3.1,qes:1.2,sensitivity:91dB", "t=re:5ohm,diameter:26mm,sd:7cm2,xmax:0.5mm,vas:1l",
		"a=", "=8ohm", "a=8", "a]\n[parts=8ohm", "w=none.zma,none.frd", "w=impedance:1.2.3", "q=qms:1e400", "µ=8Ω", "a=re:5ohm,", `C=C:\w.zma`,
		"w=re:6ohm,vas:20l,fs:40Hz,qms:4,qes:0.4,closed:14l", "w=re:6ohm,vented:14l/40Hz", "my t=6ohm",
	} {
		f.Add(seed, "Title \"quoted\"\x7f")
	}
	f.Fuzz(func(t *testing.T, driver, title string) {
		stdout, stderr, code := run("", "start", "--at", "2kHz", "--shape", "butterworth", "--order", "2", "--load", "8ohm",
			"--driver", driver, "--driver", "zz=8ohm", "--title", title)
		if code != exitDone {
			if code != exitUsage || stdout != "" || !strings.HasPrefix(stderr, "sixdown: error: ") || !strings.Contains(stderr, "; ") {
				t.Fatalf("exit code %d, %q, %q", code, stdout, stderr)
			}
			return
		}
		d, _, err := xover.Parse("start", []byte(stdout))
		if err != nil {
			t.Fatalf("%v\n%s", err, stdout)
		}
		name, _, _ := strings.Cut(driver, "=")
		if title != "" && d.Title != strings.ToValidUTF8(title, "\uFFFD") || d.Driver(strings.TrimSpace(name)) == nil {
			t.Fatalf("title %q, drivers %+v\n%s", d.Title, d.Drivers, stdout)
		}
	})
}
