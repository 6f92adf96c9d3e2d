package main

import (
	"fmt"
	"strconv"
	"time"

	core "k8s.io/api/core/v1"
	policy "k8s.io/api/policy/v1"
)

// leastReady is how long a new pod must be ready before it counts: gRPC's resolver asks
// DNS at most every 30 s, and the answer takes a moment.
const leastReady = 35

// rules gathers what is broken.
type rules struct{ broken []string }

// hold notes a rule that does not hold.
func (r *rules) hold(number string, holds bool, what string, values ...any) {
	if !holds {
		r.broken = append(r.broken, number+": "+fmt.Sprintf(what, values...))
	}
}

// faults holds the objects against the rules and the settings of the program.
func (o *objects) faults(settings map[string]string) []string {
	r := &rules{}
	r.hold("base", len(o.deployments) == 1 && len(o.budgets) == 1 && len(o.accounts) == 1 && len(o.maps) == 1,
		"%d Deployments, %d budgets, %d accounts, %d ConfigMaps", len(o.deployments), len(o.budgets), len(o.accounts), len(o.maps))
	if len(r.broken) > 0 {
		return r.broken
	}
	o.rollout(r, settings)
	o.addresses(r, settings)
	o.disruption(r)
	o.confinement(r)
	return r.broken
}

// rollout is K1: new pods first, and time for clients to find them.
func (o *objects) rollout(r *rules, settings map[string]string) {
	spec := o.deployments[0].Spec
	rolling := spec.Strategy.RollingUpdate
	r.hold("K1", rolling != nil && rolling.MaxUnavailable != nil && rolling.MaxUnavailable.String() == "0", "maxUnavailable is not 0")
	r.hold("K1", rolling != nil && rolling.MaxSurge != nil && rolling.MaxSurge.String() == "1", "maxSurge is not 1")
	r.hold("K1", spec.MinReadySeconds >= leastReady, "minReadySeconds %d is under %d", spec.MinReadySeconds, leastReady)
	grace := spec.Template.Spec.TerminationGracePeriodSeconds
	stated, err := time.ParseDuration(settings["termination_grace"])
	r.hold("K1", err == nil && grace != nil && time.Duration(*grace)*time.Second >= stated,
		"the pod's grace is under termination_grace %s", settings["termination_grace"])
	r.hold("K1", spec.Replicas != nil && *spec.Replicas >= 2, "fewer than two replicas")
	r.hold("K1", spec.Template.Spec.Containers[0].Lifecycle == nil, "a hook waits where the process does so itself")
}

// addresses is K2: one headless Service, one with an address, for the same pods.
func (o *objects) addresses(r *rules, settings map[string]string) {
	headless, plain := 0, 0
	labels := o.deployments[0].Spec.Template.Labels
	named := map[string]string{}
	for _, p := range o.deployments[0].Spec.Template.Spec.Containers[0].Ports {
		named[p.Name] = strconv.Itoa(int(p.ContainerPort))
	}
	for _, name := range []string{"gate", "general", "health", "metrics"} {
		r.hold("K2", named[name] == port(settings[name+"_address"]), "port %s is %q, the setting is %q", name, named[name], settings[name+"_address"])
	}
	for _, s := range o.services {
		if s.Spec.ClusterIP == core.ClusterIPNone {
			headless++
		} else {
			plain++
		}
		r.hold("K2", !s.Spec.PublishNotReadyAddresses, "%s publishes addresses that are not ready", s.Name)
		r.hold("K2", len(s.Spec.Selector) > 0, "%s selects nothing", s.Name)
		for k, v := range s.Spec.Selector {
			r.hold("K2", labels[k] == v, "%s selects %s=%s, pods have %q", s.Name, k, v, labels[k])
		}
		for _, p := range s.Spec.Ports {
			r.hold("K2", named[p.TargetPort.String()] == strconv.Itoa(int(p.Port)), "%s: port %d leads to %q", s.Name, p.Port, p.TargetPort.String())
			r.hold("K2", p.TargetPort.String() != "health", "%s publishes the health port", s.Name)
		}
	}
	r.hold("K2", headless == 1 && plain == 1, "%d headless and %d plain Services", headless, plain)
}

// disruption is K5: one at a time leaves, pods are spread, probes ask for health.
func (o *objects) disruption(r *rules) {
	budget := o.budgets[0].Spec
	r.hold("K5", budget.MaxUnavailable != nil && budget.MaxUnavailable.String() == "1", "the budget is not maxUnavailable 1")
	r.hold("K5", budget.UnhealthyPodEvictionPolicy != nil && *budget.UnhealthyPodEvictionPolicy == policy.AlwaysAllow,
		"pods that are not ready hold up evictions")
	template := o.deployments[0].Spec.Template
	for k, v := range budget.Selector.MatchLabels {
		r.hold("K5", template.Labels[k] == v, "the budget selects %s=%s", k, v)
	}
	spread := map[string]bool{}
	for _, c := range template.Spec.TopologySpreadConstraints {
		spread[c.TopologyKey] = c.MaxSkew == 1
	}
	r.hold("K5", spread["kubernetes.io/hostname"] && spread["topology.kubernetes.io/zone"], "pods are not spread over hosts and zones")
	container := template.Spec.Containers[0]
	asked := map[string]bool{}
	for name, probe := range map[string]*core.Probe{
		"startup": container.StartupProbe, "readiness": container.ReadinessProbe, "liveness": container.LivenessProbe,
	} {
		if probe == nil || probe.GRPC == nil || probe.GRPC.Service == nil {
			r.hold("K5", false, "the %s probe is not of type grpc with a service", name)
			continue
		}
		health := int32(0)
		for _, p := range container.Ports {
			if p.Name == "health" {
				health = p.ContainerPort
			}
		}
		r.hold("K5", probe.GRPC.Port == health, "the %s probe asks port %d", name, probe.GRPC.Port)
		r.hold("K5", !asked[*probe.GRPC.Service], "two probes ask for %q", *probe.GRPC.Service)
		r.hold("K5", name == "startup" || *probe.GRPC.Service == name, "the %s probe asks for %q", name, *probe.GRPC.Service)
		asked[*probe.GRPC.Service] = true
	}
}

// confinement is K7: the restricted pod security standard, and memory reserved in full.
func (o *objects) confinement(r *rules) {
	pod := o.deployments[0].Spec.Template.Spec
	r.hold("K7", len(pod.Containers) == 1 && len(pod.InitContainers) == 0, "there are containers that are not checked")
	r.hold("K7", isFalse(pod.AutomountServiceAccountToken) && isFalse(o.accounts[0].AutomountServiceAccountToken), "a token is mounted")
	r.hold("K7", pod.ServiceAccountName == o.accounts[0].Name, "the pod runs as %q", pod.ServiceAccountName)
	r.hold("K7", !pod.HostNetwork && !pod.HostPID && !pod.HostIPC, "the pod shares a namespace of the host")
	s := pod.SecurityContext
	r.hold("K7", s != nil && s.RunAsNonRoot != nil && *s.RunAsNonRoot && s.RunAsUser != nil && *s.RunAsUser == 65532, "the pod may run as root")
	r.hold("K7", s != nil && s.SeccompProfile != nil && s.SeccompProfile.Type == core.SeccompProfileTypeRuntimeDefault, "no seccomp profile")
	c := pod.Containers[0]
	if c.SecurityContext == nil {
		r.hold("K7", false, "the container is not confined")
		return
	}
	r.hold("K7", isFalse(c.SecurityContext.AllowPrivilegeEscalation), "privileges may be gained")
	r.hold("K7", c.SecurityContext.ReadOnlyRootFilesystem != nil && *c.SecurityContext.ReadOnlyRootFilesystem, "the root can be written")
	caps := c.SecurityContext.Capabilities
	r.hold("K7", caps != nil && len(caps.Add) == 0 && len(caps.Drop) == 1 && caps.Drop[0] == "ALL", "capabilities are kept")
	r.hold("K7", c.SecurityContext.Privileged == nil, "privileged is set")
	r.hold("K7", c.Resources.Limits.Cpu().IsZero(), "a CPU limit throttles the trigger")
	r.hold("K7", !c.Resources.Requests.Memory().IsZero() && c.Resources.Requests.Memory().Cmp(*c.Resources.Limits.Memory()) == 0,
		"memory asked for is not the memory limit")
	for _, m := range c.VolumeMounts {
		r.hold("K7", m.SubPath == "" && m.ReadOnly, "%s is writable, or a single file that never follows a change", m.MountPath)
	}
}

func isFalse(b *bool) bool { return b != nil && !*b }
