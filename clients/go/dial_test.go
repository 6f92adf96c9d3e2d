package kinegate_test

import (
	"encoding/json"
	"testing"

	"google.golang.org/protobuf/reflect/protoreflect"

	kinegate "example.org/kinegate/clients/go"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// TestServiceConfig: every unary call has a deadline and a policy of retries, and no
// stream has either.
func TestServiceConfig(t *testing.T) {
	var config struct {
		MethodConfig []struct {
			Name        []struct{ Service, Method string }
			Timeout     string
			RetryPolicy map[string]any
		}
	}
	if err := json.Unmarshal([]byte(kinegate.ServiceConfig), &config); err != nil {
		t.Fatal(err)
	}
	tried, known := map[string]bool{}, map[string]bool{}
	for _, c := range config.MethodConfig {
		for _, n := range c.Name {
			known[n.Service+"/"+n.Method] = true
			tried[n.Service+"/"+n.Method] = c.Timeout != "" && len(c.RetryPolicy) > 0
		}
	}
	unary := 0
	for _, file := range []protoreflect.FileDescriptor{
		kinegatev1.File_kinegate_v1_particle_proto, kinegatev1.File_kinegate_v1_reaction_proto, kinegatev1.File_kinegate_v1_decay_proto,
		kinegatev1.File_kinegate_v1_photon_proto, kinegatev1.File_kinegate_v1_generation_proto,
		kinegatev1.File_kinegate_v1_selection_proto, kinegatev1.File_kinegate_v1_info_proto,
	} {
		for i := range file.Services().Len() {
			service := file.Services().Get(i)
			for k := range service.Methods().Len() {
				method := service.Methods().Get(k)
				whole, one := string(service.FullName())+"/", string(service.FullName())+"/"+string(method.Name())
				stream := method.IsStreamingClient() || method.IsStreamingServer()
				if !known[whole] && !known[one] || (tried[whole] || tried[one]) == stream {
					t.Errorf("%s: stream %t, tried again %t", one, stream, tried[whole] || tried[one])
				}
				if !stream {
					unary++
				}
			}
		}
	}
	const leastUnary = 15
	if unary < leastUnary {
		t.Errorf("%d unary calls", unary)
	}
}
