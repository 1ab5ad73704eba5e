#!/usr/bin/env bash
# Builds service/Dockerfile as it is where there is no container engine and no image registry, and runs it.
# As root, with buildah and debootstrap. A Debian made here stands in for the base image: the same release and
# the same Python 3.11, from the distribution's mirror. Prints what the built image says about itself.
#   usage: build_without_engine.sh SCRATCH CONTEXT COMMAND...
set -euo pipefail
scratch=$1 context=$2
shift 2

image=forebay:test
base=$(sed -n 's/^FROM \(\S*\).*/\1/p' "$context/service/Dockerfile" | sort -u)
store=(buildah --root "$scratch/images" --runroot "$scratch/running" --storage-driver vfs)

mirror=$(apt-get indextargets --format '$(SITE)' 'Created-By: Packages' | grep -m1 '/debian/*$')
if [[ ! -d $scratch/debian ]]; then
    debootstrap --variant=minbase --include=python3,python3-venv,ca-certificates bookworm "$scratch/debian" "$mirror" \
        > "$scratch/debootstrap.log" 2>&1
    ln -sf python3 "$scratch/debian/usr/bin/python"
    mkdir -p "$scratch/base"
    tar -C "$scratch/debian" -cf "$scratch/base/base.tar" .
    printf 'FROM scratch\nADD base.tar /\n' > "$scratch/base/Dockerfile"
    "${store[@]}" build --isolation chroot --tag "localhost/$base" "$scratch/base" > "$scratch/base.log" 2>&1
fi

# The settings with which this machine reaches its package index and trusts it.
mounts=()
for path in /etc/pip.conf /etc/xdg /etc/ssl/certs; do
    [[ -e $path ]] && mounts+=(--volume "$path:$path:ro")
done
"${store[@]}" build --isolation chroot --pull-never --network host --format docker "${mounts[@]}" \
    --file "$context/service/Dockerfile" --tag "$image" "$context" > "$scratch/build.log" 2>&1

"${store[@]}" inspect --type image "$image" > "$scratch/image.json"
container=$("${store[@]}" from --pull-never "$image")
trap '"${store[@]}" rm "$container" > /dev/null' EXIT
"${store[@]}" run --isolation chroot --network host "$container" -- "$@"
