# Installs Lampwarden as a Windows service. Run in an elevated PowerShell, from the folder that publish.sh made (publish\win-x64).
param(
    [string]$Folder = "$env:ProgramFiles\Lampwarden",
    [string]$Data = "$env:ProgramData\Lampwarden"
)
$ErrorActionPreference = 'Stop'
$here = Split-Path -Parent $PSScriptRoot
New-Item -ItemType Directory -Force $Folder, $Data | Out-Null
if (Get-Service Lampwarden -ErrorAction SilentlyContinue) { Stop-Service Lampwarden }
Copy-Item -Recurse -Force "$here\*" $Folder
if (-not (Test-Path "$Data\bench.json")) { Write-Host "Put your configuration at $Data\bench.json before you start the service." }
# The record and the secrets are for the service and the administrators only.
icacls $Data /inheritance:r /grant:r 'SYSTEM:(OI)(CI)F' 'Administrators:(OI)(CI)F' 'NT SERVICE\Lampwarden:(OI)(CI)M' | Out-Null
$command = "`"$Folder\lampwarden.exe`" watch --resume --config `"$Data\bench.json`" --record `"$Data\soaks`""
if (-not (Get-Service Lampwarden -ErrorAction SilentlyContinue)) {
    New-Service -Name Lampwarden -DisplayName 'Lampwarden' -Description 'Watches soaking mains units' -BinaryPathName $command -StartupType Automatic | Out-Null
    sc.exe config Lampwarden obj= 'NT SERVICE\Lampwarden' | Out-Null
}
# Started anew two seconds after any failure, also after it ended itself because a bench was stuck.
sc.exe failure Lampwarden reset= 600 actions= restart/2000/restart/2000/restart/30000 | Out-Null
sc.exe failureflag Lampwarden 1 | Out-Null
Write-Host 'Installed. Start it with: Start-Service Lampwarden'
