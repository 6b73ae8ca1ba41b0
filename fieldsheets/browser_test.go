package fieldsheets

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// lookAt opens pages in a real browser by testdata/browser/look.mjs and returns what is wrong with them. It needs Node.js, Chromium and
// a folder with playwright-core and axe-core, named by PAGE_TOOLS; .ci/run brings them.
func lookAt(t *testing.T, pages map[string]string) string {
	t.Helper()
	tools := os.Getenv("PAGE_TOOLS")
	node, noNode := exec.LookPath("node")
	chromium, noChromium := exec.LookPath("chromium")
	if tools == "" || noNode != nil || noChromium != nil {
		t.Skip("PAGE_TOOLS is not set, or there is no Node.js or Chromium: pages are opened by .ci/run")
	}
	dir := t.TempDir()
	args := []string{"testdata/browser/look.mjs"}
	for name, text := range pages {
		path := filepath.Join(dir, name+".html")
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		args = append(args, path)
	}
	cmd := exec.Command(node, args...)
	cmd.Env = append(os.Environ(), "CHROMIUM="+chromium)
	cmd.Stderr = os.Stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	found, done := strings.CutSuffix(strings.TrimSpace(string(out)), "looked at every page")
	if !done {
		t.Fatalf("the browser did not get through: %s", out)
	}
	return strings.TrimSpace(found)
}

// No console message, no request, no overflow from phone to paper, no serious finding of axe-core; with sound and with hostile text.
func TestPagesInTheBrowser(t *testing.T) {
	pages := map[string]string{"summary": printed(t, "html", sampleReport()), "hostile": printed(t, "html", dress("<img src=x onerror=alert(1)>")),
		"long": printed(t, "html", dress(strings.Repeat("x", 500))), "right-to-left": printed(t, "html", dress("\u202eשלום عالم"))}
	for name, text := range map[string]string{"sheet": "plain", "sheet-hostile": "<img src=x onerror=alert(1)>", "sheet-long": strings.Repeat("x", 500)} {
		pages[name] = sheetPrinted(t, sampleSheet(text))
	}
	if found := lookAt(t, pages); found != "" {
		t.Error(found)
	}
}

// The look itself must see what it is there for.
func TestTheBrowserSeesFaults(t *testing.T) {
	found := lookAt(t, map[string]string{"bad": `<!doctype html><html><head><title>x</title></head><body><div style="width:2000px">wide</div><img src="http://127.0.0.1:9/x.png"><script>console.log("hello")</script></body></html>`})
	for _, what := range []string{"overflow", "request", "console", "axe"} {
		if !strings.Contains(found, `"what":"`+what+`"`) {
			t.Errorf("%s was not seen: %s", what, found)
		}
	}
}
