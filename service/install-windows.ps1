# Installs Lampwarden as a Windows service, or replaces its files. Run in an elevated PowerShell: service\install-windows.ps1 in
# the folder that publish.sh made (publish\win-x64).
param(
    [string]$Folder = "$env:ProgramFiles\Lampwarden",
    [string]$Data = "$env:ProgramData\Lampwarden"
)
$ErrorActionPreference = 'Stop'

# A program's exit code stops no script by itself, and half an installation must not look like a whole one.
function Invoke-Checked([string]$Program) {
    & $Program @args | Out-Null
    if ($LASTEXITCODE -ne 0) { throw "$Program $args ended with $LASTEXITCODE." }
}

$here = Split-Path -Parent $PSScriptRoot
New-Item -ItemType Directory -Force $Folder, $Data | Out-Null
$service = Get-Service Lampwarden -ErrorAction SilentlyContinue
$wasRunning = $service -and $service.Status -eq 'Running'
if ($service) { Stop-Service Lampwarden }
Copy-Item -Recurse -Force "$here\*" $Folder
if (-not $service) {
    $command = "`"$Folder\lampwarden.exe`" watch --resume --config `"$Data\bench.json`" --record `"$Data\soaks`""
    New-Service -Name Lampwarden -DisplayName 'Lampwarden' -Description 'Watches soaking mains units' -BinaryPathName $command -StartupType Automatic | Out-Null
    Invoke-Checked sc.exe config Lampwarden obj= 'NT SERVICE\Lampwarden'
}
# Started anew two seconds after any failure, also after it ended itself because a bench was stuck.
Invoke-Checked sc.exe failure Lampwarden reset= 600 actions= restart/2000/restart/2000/restart/30000
Invoke-Checked sc.exe failureflag Lampwarden 1
# The record and the secrets are for the service and the administrators only. Not before the service is there: its account is known
# to Windows only from then on. The first two are SYSTEM and Administrators, whose names differ from language to language.
Invoke-Checked icacls $Data /inheritance:r /grant:r '*S-1-5-18:(OI)(CI)F' '*S-1-5-32-544:(OI)(CI)F' 'NT SERVICE\Lampwarden:(OI)(CI)M'
if (-not (Test-Path "$Data\bench.json")) {
    Write-Host "Installed. Put your configuration at $Data\bench.json, try it with"
} elseif ($wasRunning) {
    Start-Service Lampwarden
    Write-Host 'Replaced, and started again.'
    return
} else {
    Write-Host 'Installed. Try the configuration with'
}
Write-Host "  & `"$Folder\lampwarden.exe`" check --config `"$Data\bench.json`""
Write-Host 'and start it with: Start-Service Lampwarden'
