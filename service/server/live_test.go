package server

import (
	"errors"
	"slices"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestReloadUnderLoad reloads a thousand times under load, one in ten invalid: no call
// fails and the metrics tell the truth.
func TestReloadUnderLoad(t *testing.T) {
	var next atomic.Pointer[Options]
	broken := errors.New("the file is broken")
	r := start(t, func(_ *Options, d *Deps) {
		d.Settings = func() (Options, error) {
			if o := next.Load(); o != nil {
				return *o, nil
			}
			return Options{}, broken
		}
		first := quick()
		next.Store(&first)
	})
	stop := make(chan struct{})
	end := sync.OnceFunc(func() { close(stop) })
	defer end()
	var calls, failed atomic.Int64
	var callers sync.WaitGroup
	client := kinegatev1.NewInfoServiceClient(r.general(t))
	for range 4 {
		callers.Go(func() {
			for {
				select {
				case <-stop:
					return
				default:
				}
				calls.Add(1)
				if _, err := client.GetInfo(t.Context(), &kinegatev1.GetInfoRequest{}); err != nil {
					failed.Add(1)
				}
			}
		})
	}
	for i := range 1000 {
		o := quick()
		o.DefaultDeadline = 10*time.Second + time.Duration(i)*time.Millisecond
		o.LogLevel = []string{"info", "warn"}[i%2]
		bad := i%10 == 9
		switch {
		case bad && i%20 == 9:
			next.Store(nil)
		case bad:
			o.CreditBlocks = 9 // only a new process takes it
			fallthrough
		default:
			next.Store(&o)
		}
		before := r.current.Load().options.DefaultDeadline
		err := r.Reload()
		if (err != nil) != bad {
			t.Fatalf("reload %d: %v", i, err)
		}
		if now := r.current.Load().options.DefaultDeadline; bad && now != before || !bad && now != o.DefaultDeadline {
			t.Fatalf("reload %d: deadline %v, was %v", i, now, before)
		}
		success, when := r.metric(t, "kinegate_config_reload_success"), r.metric(t, "kinegate_config_reload_success_timestamp_seconds")
		if success != map[bool]float64{true: 0, false: 1}[bad] || when > float64(time.Now().UnixNano())/1e9 || when < float64(time.Now().Unix()-30) {
			t.Fatalf("reload %d: success %g at %f", i, success, when)
		}
	}
	end()
	callers.Wait()
	if failed.Load() > 0 || calls.Load() < 1000 {
		t.Errorf("%d of %d calls failed", failed.Load(), calls.Load())
	}
	if text := r.log.String(); strings.Count(text, "settings are bad") != 100 {
		t.Errorf("%d lines of bad settings", strings.Count(text, "settings are bad"))
	}
}

// TestReloadTakesOnlySome tries every setting.
func TestReloadTakesOnlySome(t *testing.T) {
	for _, s := range Settings() {
		old, changed := Defaults(), Defaults()
		value := map[string]string{
			"text": "x", "word": "debug", "list": "a,b", "size": "17KiB", "number": "17", "time": "17m0s",
			"bool": map[string]string{"true": "false", "false": "true"}[s.Default],
		}[s.Kind()]
		if e := s.In(&changed).Set(value); e != nil {
			t.Fatal(e)
		}
		names := faultNames(fixedFaults(&old, &changed).Err())
		if want := !s.Reloads(); slices.Equal(names, []string{s.Name}) != want || !want && len(names) > 0 {
			t.Errorf("%s: faults of %v", s.Name, names)
		}
	}
	for _, name := range reloadable() {
		if !slices.ContainsFunc(Settings(), func(s Setting) bool { return s.Name == name }) {
			t.Errorf("%s is no setting", name)
		}
	}
}
