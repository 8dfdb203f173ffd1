using Lampwarden.Host.Commands;

return await CommandLine.RunAsync(args);
