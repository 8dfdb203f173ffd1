#!/usr/bin/env bash
# Publishes self-contained single files, no runtime needed: service/publish.sh [RID ...], into publish/RID.
set -euo pipefail
cd "$(dirname "$0")/.."
targets=("$@")
[ ${#targets[@]} -gt 0 ] || targets=(linux-x64 linux-arm64 win-x64)
for target in "${targets[@]}"; do
  out="publish/$target"
  rm -rf "$out"
  dotnet publish src/Host -c Release -r "$target" --self-contained -o "$out" \
    -p:PublishSingleFile=true -p:IncludeNativeLibrariesForSelfExtract=true -p:DebugType=none -p:DebugSymbols=false -v q --nologo
  mkdir -p "$out/docs" "$out/service" "$out/config"
  cp docs/*.md "$out/docs/"
  cp service/lampwarden.service service/install-windows.ps1 "$out/service/"
  cp -r config/. "$out/config/"
  cp LICENSE "$out/"
  # The simulator is inside the file; what is left beside it of its own start belongs to no program here.
  rm -f "$out/Lampwarden.Simulator.runtimeconfig.json"
  # Names are relative to the folder, so that they can be checked where it was copied to: sha256sum -c SHA256SUMS.
  (cd "$out" && find . -type f ! -name SHA256SUMS -printf '%P\0' | LC_ALL=C sort -z | xargs -0 sha256sum -- > SHA256SUMS)
  echo "$out: $(du -sh "$out" | cut -f1)"
done
