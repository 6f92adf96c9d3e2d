// Command check holds what is deployed against what was promised, without a cluster:
//
//	check settings FOLDER                    the settings in the ConfigMap
//	check manifests -settings FILE FOLDER    Kubernetes objects, strictly decoded
//	check sbom PROGRAM                       the modules of a program, as CycloneDX JSON
//
// It is a module of its own, so that the types of Kubernetes stay out of the program's.
package main
