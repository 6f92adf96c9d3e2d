"""Messages and stubs made from proto/kinegate/v1 by .ci/generate-python."""
