using System.Collections.Frozen;
using System.Reflection;
using System.Security.Cryptography;

namespace Lampwarden.Host.Web.Files;

/// <summary>The page's files, as they lie in the assembly.</summary>
internal static class PageFiles
{
    private const string Prefix = "page/";

    private static readonly FrozenDictionary<string, PageFile> All = Load();

    /// <summary>Whether the build had npm, so that traces can be drawn.</summary>
    public static bool HasTraces => All.ContainsKey("/parts/uPlot.esm.js");

    /// <summary>Whether a path is one of the page's files.</summary>
    public static bool Has(PathString path) => path.Value is null or "/" || All.ContainsKey(path.Value);

    /// <summary>Answers a GET of one of the files; anything else goes on.</summary>
    public static async Task ServeAsync(HttpContext context, RequestDelegate next)
    {
        var request = context.Request;
        var path = request.Path.Value is null or "/" ? "/index.html" : request.Path.Value;
        if (!(HttpMethods.IsGet(request.Method) || HttpMethods.IsHead(request.Method)) || !All.TryGetValue(path, out var file))
        {
            await next(context);
            return;
        }

        var response = context.Response;
        response.Headers.ETag = file.Tag;
        // A new version of the program must never meet an old script: the browser asks each time, and is told briefly.
        response.Headers.CacheControl = "no-cache";
        if (request.Headers.IfNoneMatch == file.Tag)
        {
            response.StatusCode = StatusCodes.Status304NotModified;
            return;
        }

        response.ContentType = file.MediaType;
        response.ContentLength = file.Bytes.Length;
        if (!HttpMethods.IsHead(request.Method))
        {
            await response.Body.WriteAsync(file.Bytes, context.RequestAborted);
        }
    }

    private static FrozenDictionary<string, PageFile> Load()
    {
        var assembly = Assembly.GetExecutingAssembly();
        var files = new Dictionary<string, PageFile>(StringComparer.Ordinal);
        foreach (var name in assembly.GetManifestResourceNames().Where(name => name.StartsWith(Prefix, StringComparison.Ordinal)))
        {
            using var stream = assembly.GetManifestResourceStream(name)!;
            var bytes = new byte[stream.Length];
            stream.ReadExactly(bytes);
            files["/" + name[Prefix.Length..]] = new PageFile(bytes, MediaType(name), $"\"{Convert.ToHexStringLower(SHA256.HashData(bytes)[..12])}\"");
        }

        return files.ToFrozenDictionary(StringComparer.Ordinal);
    }

    private static string MediaType(string name) => Path.GetExtension(name) switch
    {
        ".html" => "text/html; charset=utf-8",
        ".js" => "text/javascript; charset=utf-8",
        ".css" => "text/css; charset=utf-8",
        ".svg" => "image/svg+xml",
        ".png" => "image/png",
        ".woff2" => "font/woff2",
        ".webmanifest" => "application/manifest+json",
        _ => "text/plain; charset=utf-8",
    };

    private sealed record PageFile(byte[] Bytes, string MediaType, string Tag);
}
