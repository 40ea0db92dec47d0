package main

import (
	"errors"
	"flag"
	"fmt"
	"mime"
	"net"
	"net/http"
	"os"
	"path/filepath"
	"strings"
	"time"

	"escapement/wasm/press/service"
)

// serve puts the built site on a loopback port, so that it can be used from a
// clone. Beside the files it answers the print service's routes under /press/, for
// programs: the page itself sends nothing and prints in its own worker.
//
//	escapement serve [-port 8017] [-dir site/dist]
//
// Port 0 takes any free one. The address goes to standard output.
func serve(args []string) error {
	flags := flag.NewFlagSet("serve", flag.ContinueOnError)
	port := flags.Int("port", 8017, "port on the loopback address; 0 takes any free one")
	dir := flags.String("dir", filepath.Join("site", "dist"), "folder of the built site")
	if err := flags.Parse(args); err != nil {
		return err
	}
	if _, err := os.Stat(filepath.Join(*dir, "index.html")); err != nil {
		return fmt.Errorf("%s holds no built site: run `make site` first, or name its folder with -dir", *dir)
	}
	listener, err := net.Listen("tcp", fmt.Sprintf("127.0.0.1:%d", *port))
	if err != nil {
		return fmt.Errorf("port %d cannot be had (%w): name another with -port, or 0 for any", *port, err)
	}
	fmt.Printf("http://%s/\n", listener.Addr())
	server := &http.Server{Handler: site(*dir), ReadHeaderTimeout: 10 * time.Second}
	if err := server.Serve(listener); !errors.Is(err, http.ErrServerClosed) {
		return err
	}
	return nil
}

// site is the files and the print service. Other pages in the browser cannot make it
// work: their requests are told by where they come from.
func site(dir string) http.Handler {
	mux := http.NewServeMux()
	mux.Handle(service.Prefix, http.NewCrossOriginProtection().Handler(service.New()))
	mux.Handle("/", files(dir))
	return mux
}

// policy is what index.html says in its meta element, and who may frame the page,
// which only a header can say. Workers have only the header.
const policy = "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; worker-src 'self'; connect-src 'self'; style-src 'self'; img-src 'self' data: blob:; manifest-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"

// files serves a folder as a static host would, with the types a browser insists
// on and without lists of folders.
func files(dir string) http.Handler {
	// Machines differ in their tables of types; the page needs these to be right.
	for ext, typ := range map[string]string{".js": "text/javascript; charset=utf-8", ".wasm": "application/wasm", ".css": "text/css; charset=utf-8", ".svg": "image/svg+xml", ".webmanifest": "application/manifest+json"} {
		if err := mime.AddExtensionType(ext, typ); err != nil {
			panic("serve: " + err.Error())
		}
	}
	host := http.FileServer(http.Dir(dir))
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		if r.Method != http.MethodGet && r.Method != http.MethodHead {
			http.Error(w, "this server only hands out files", http.StatusMethodNotAllowed)
			return
		}
		if strings.HasSuffix(r.URL.Path, "/") && r.URL.Path != "/" {
			http.NotFound(w, r)
			return
		}
		w.Header().Set("Cache-Control", "no-cache") // asked again each time, answered 304 where nothing changed
		w.Header().Set("Content-Security-Policy", policy)
		w.Header().Set("Referrer-Policy", "no-referrer")
		w.Header().Set("X-Content-Type-Options", "nosniff")
		host.ServeHTTP(w, r)
	})
}
