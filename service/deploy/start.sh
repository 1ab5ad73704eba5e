#!/bin/sh
# Starts the service with the kernels that were compiled with the image: their cache has to be writable, and the
# file system of the image is not. On a processor of another kind they are compiled anew, while /readyz waits.
set -eu
cp -R "$PREPARED/." "$CACHE"
exec "$@"
