using System.Net;
using InfluxDB.Client;
using InfluxDB.Client.Core.Exceptions;
using Lampwarden.Host.Configuration;
using WritePrecision = InfluxDB.Client.Api.Domain.WritePrecision;

namespace Lampwarden.Host.Recording.Forwarding;

/// <summary>What became of a batch.</summary>
internal enum SendResult
{
    /// <summary>The server has it.</summary>
    Sent,

    /// <summary>The server is away or busy: the same again later.</summary>
    Later,

    /// <summary>Something in the batch will never be taken.</summary>
    Refused,

    /// <summary>Nothing will be taken before somebody changes the configuration or the server.</summary>
    Halted,
}

/// <summary>What became of a batch, in words, and when to try again if the server said so.</summary>
internal readonly record struct SendOutcome(SendResult Result, string? Why = null, TimeSpan? After = null);

/// <summary>One server. The token is read here and goes nowhere but into the request's header.</summary>
internal sealed class InfluxTarget : IDisposable
{
    /// <summary>Takes the token where no file is named.</summary>
    public const string TokenVariable = "LAMPWARDEN_INFLUX_TOKEN";

    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(10);

    private readonly InfluxDBClient _client;
    private readonly WriteApiAsync _write;
    private readonly HttpClient _http;
    private readonly InfluxOptions _options;

    /// <exception cref="StoreException">The token's file cannot be read.</exception>
    public InfluxTarget(InfluxOptions options)
    {
        _options = options;
        var token = ReadToken(options);
        _http = new HttpClient(options.Api == "v1" ? new V1Handler(token) : new SocketsHttpHandler()) { Timeout = Patience };
        _client = new InfluxDBClient(new InfluxDBClientOptions(options.Url)
        {
            Token = token ?? "none",
            Org = options.Org.Length > 0 ? options.Org : "-",
            Bucket = options.Bucket,
            Timeout = Patience,
            HttpClient = _http,
        });
        _write = _client.GetWriteApiAsync();
    }

    /// <summary>Names the target in the store; no secret in it.</summary>
    public string Name => $"{_options.Api} {new Uri(_options.Url).GetLeftPart(UriPartial.Path)} {_options.Org}/{_options.Bucket}";

    public async Task<SendOutcome> SendAsync(IReadOnlyList<string> lines, CancellationToken cancellationToken)
    {
        try
        {
            await _write.WriteRecordsAsync([.. lines], WritePrecision.Ms, _options.Bucket, _options.Org.Length > 0 ? _options.Org : "-", cancellationToken);
            return new SendOutcome(SendResult.Sent);
        }
        catch (HttpException trouble)
        {
            cancellationToken.ThrowIfCancellationRequested();
            return Judge(trouble);
        }
        catch (Exception trouble) when (trouble is HttpRequestException or TaskCanceledException or IOException)
        {
            cancellationToken.ThrowIfCancellationRequested();
            return new SendOutcome(SendResult.Later, trouble.Message);
        }
    }

    public void Dispose()
    {
        _client.Dispose();
        _http.Dispose();
    }

    private SendOutcome Judge(HttpException trouble)
    {
        var status = trouble.Status;
        var after = trouble.RetryAfter is { } seconds and > 0 ? TimeSpan.FromSeconds(Math.Min(seconds, 600)) : (TimeSpan?)null;
        var said = $"{(status == 0 ? "no answer" : $"answer {status}")} from {_options.Url}: {trouble.Message}";
        return (HttpStatusCode)status switch
        {
            HttpStatusCode.BadRequest or HttpStatusCode.UnprocessableEntity or HttpStatusCode.RequestEntityTooLarge => new(SendResult.Refused, said),
            HttpStatusCode.Unauthorized or HttpStatusCode.Forbidden => new(SendResult.Halted, $"{said} (check the token: {TokenVariable} or recording.influx.tokenFile)"),
            HttpStatusCode.RequestTimeout or HttpStatusCode.TooManyRequests => new(SendResult.Later, said, after),
            >= HttpStatusCode.BadRequest and < HttpStatusCode.InternalServerError => new(SendResult.Halted, $"{said} (check recording.influx: url, org, bucket, api)"),
            _ => new(SendResult.Later, said, after),
        };
    }

    private static string? ReadToken(InfluxOptions options)
    {
        if (options.TokenFile is not { } file)
        {
            return Environment.GetEnvironmentVariable(TokenVariable);
        }

        try
        {
            return File.ReadAllText(file).Trim();
        }
        catch (Exception trouble) when (trouble is IOException or UnauthorizedAccessException)
        {
            throw new StoreException($"The token file {file} of recording.influx cannot be read: {trouble.Message}", trouble);
        }
    }
}
